package csv

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// Records are records of another format, written as this package reads them: divided
// by commas, a heading in one of the lines, as many fields in each record as the heading
// has. The readers of sheets and of JSON make them, so that types, units, times, missing
// values and lines that are set aside are the same in every format.
type Records struct {
	Source  *reader.Source // of the file that they stand for
	Text    []byte
	Heading int           // its line; 0: the first
	Types   []column.Type // of the columns by the file's own word; Null: found as in any CSV file
	Whole   bool          // a blank line is a record with a missing value, not one to skip
}

// ReadRecords makes one table of records, their types decided over all of them.
// Options.Delimiter, Heading and Encoding do not count. Lines and fields of faults are
// those of Records.Text.
func ReadRecords(ctx context.Context, list []Records, o reader.Options) (*reader.Result, error) {
	o.Delimiter, o.Encoding = ',', ""
	if err := checkOptions(&o); err != nil {
		return nil, err
	}
	im := newImporter(ctx, o)
	for i := range list {
		im.add(&file{src: list[i].Source, given: &list[i]})
	}
	return im.guarded()
}
