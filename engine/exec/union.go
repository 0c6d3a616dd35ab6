package exec

import (
	"context"

	"nearcell/catalog/column"
)

// unionSource is the chunks of its parts one after another; where the number of
// chunks of a part shows only at its end it is a stream as a whole.
type unionSource struct {
	schema column.Schema
	parts  []*pipeline
}

func (s *unionSource) Schema() column.Schema { return s.schema }

func (s *unionSource) Chunks() int {
	total := 0
	for _, p := range s.parts {
		n := p.Chunks()
		if n == Streamed {
			return Streamed
		}
		total += n
	}
	return total
}

func (s *unionSource) Read(ctx context.Context, w *Worker, chunk int, emit Emit) error {
	if s.Chunks() == Streamed {
		for _, p := range s.parts {
			if err := p.stream(ctx, w, emit); err != nil {
				return err
			}
		}
		return nil
	}
	for _, p := range s.parts {
		if n := p.Chunks(); chunk < n {
			return p.Read(ctx, w, chunk, emit)
		} else {
			chunk -= n
		}
	}
	return nil
}
