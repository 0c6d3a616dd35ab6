package csv

import (
	"context"
	"errors"

	"nearcell/catalog/reader"
)

// Reader reads comma-separated files.
type Reader struct{}

var _ reader.Reader = Reader{}

// Read implements reader.Reader.
func (Reader) Read(ctx context.Context, src *reader.Source, o reader.Options) (*reader.Result, error) {
	return nil, errors.New("csv: not written yet")
}
