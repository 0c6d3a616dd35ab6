package present

import (
	"bufio"
	"encoding/json"
	"io"
	"math"
	"strconv"

	"nearcell/catalog/column"
)

// jsonWriter writes one object a row: as lines, or as one array. Numbers read
// back to the same bits; Infinity, which JSON has no number for, is the text
// "Infinity"; NULL is null; time stamps and intervals are texts.
type jsonWriter struct {
	w     io.Writer
	out   *bufio.Writer
	array bool
	names [][]byte // `"volume":`
	rows  int64
}

func (j *jsonWriter) Begin(s column.Schema) error {
	j.out = bufio.NewWriterSize(j.w, 1<<16)
	for _, f := range s {
		name, err := quoteJSON(f.Name)
		if err != nil {
			return err
		}
		j.names = append(j.names, append(name, ':'))
	}
	if j.array {
		_, err := j.out.WriteString("[")
		return err
	}
	return nil
}

func (j *jsonWriter) Batch(b *column.Batch) error {
	return eachRow(b, func(row int) error {
		if j.array {
			if j.rows > 0 {
				j.out.WriteString(",")
			}
			j.out.WriteString("\n")
		}
		j.rows++
		j.out.WriteString("{")
		for c := range b.Cols {
			if c > 0 {
				j.out.WriteString(",")
			}
			j.out.Write(j.names[c])
			if err := j.value(&b.Cols[c], row); err != nil {
				return err
			}
		}
		j.out.WriteString("}")
		if !j.array {
			j.out.WriteString("\n")
		}
		return nil
	})
}

func (j *jsonWriter) value(v *column.Vector, row int) error {
	if v.IsNull(row) {
		_, err := j.out.WriteString("null")
		return err
	}
	switch v.Type {
	case column.Boolean:
		_, err := j.out.WriteString(strconv.FormatBool(column.Bit(v.Bits, row)))
		return err
	case column.Integer:
		_, err := j.out.WriteString(strconv.FormatInt(v.I[row], 10))
		return err
	case column.Real:
		if f := v.F[row]; !math.IsInf(f, 0) {
			_, err := j.out.WriteString(column.FormatReal(f))
			return err
		}
	case column.Point:
		if _, err := j.out.WriteString("["); err != nil {
			return err
		}
		for k, f := range v.F[3*row : 3*row+3] {
			if k > 0 {
				j.out.WriteString(",")
			}
			j.out.WriteString(column.FormatReal(f))
		}
		_, err := j.out.WriteString("]")
		return err
	}
	text, err := quoteJSON(Exact(v, row))
	if err != nil {
		return err
	}
	_, err = j.out.Write(text)
	return err
}

// quoteJSON quotes a text without the HTML escapes that the library adds.
func quoteJSON(s string) ([]byte, error) {
	var b jsonBuffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(s); err != nil {
		return nil, err
	}
	return b[:len(b)-1], nil // without the line end that Encode adds
}

type jsonBuffer []byte

func (b *jsonBuffer) Write(p []byte) (int, error) {
	*b = append(*b, p...)
	return len(p), nil
}

func (j *jsonWriter) End() (rows, unwritten int64, err error) {
	if j.array {
		if j.rows > 0 {
			j.out.WriteString("\n")
		}
		j.out.WriteString("]\n")
	}
	return j.rows, 0, j.out.Flush()
}
