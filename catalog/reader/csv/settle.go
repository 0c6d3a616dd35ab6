package csv

import (
	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/timeform"
)

// maxKeys is how many columns are tried as the one that tells loggers apart.
const maxKeys = 8

// settle decides the local times that a clock change repeats, file by file.
func (im *importer) settle() error {
	for _, f := range im.files {
		f.repeated = make([]map[int]int64, len(im.o.Times))
		for i := range im.columns {
			if t := im.columns[i].time; t != nil && t.Zone != nil {
				if err := im.settleColumn(f, i); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

// settleColumn decides them in one column of one file. The rows of the file are
// taken as one sequence, and if that does not run through time without a step
// back, as one sequence for each value of one of the other columns (the logger).
func (im *importer) settleColumn(f *file, i int) error {
	local, line, err := im.localTimes(f, i)
	if err != nil || line == 0 {
		return err
	}
	zone := im.columns[i].time.Zone
	best, by, found := timeform.Settled{}, "", false
	for _, strict := range []bool{true, false} {
		for k := -1; k < maxKeys; k++ {
			var group []uint32
			name, whole := "", false
			if k >= 0 {
				var ok bool
				if group, name, ok = im.groups(f, k, len(local)); !ok {
					break
				}
				// Readings that are whole numbers might fall into sequences by
				// chance: numbers are taken only where they leave nothing open.
				whole = im.types[im.find(name)] == column.Integer
			}
			s := zone.Settle(local, group, strict)
			if whole && len(s.Undecided) > 0 {
				continue
			}
			if s.Orderly && (!found || len(s.Undecided) < len(best.Undecided)) {
				best, by, found = s, name, true
			}
			if found && len(best.Undecided) == 0 {
				break
			}
		}
	}
	if found && len(best.Instant) > 0 {
		f.repeated[im.columns[i].timeIndex] = best.Instant
		im.facts.Repeated = append(im.facts.Repeated, reader.RepeatedHour{
			Column: im.columns[i].name, File: f.src.Name, Rows: len(best.Instant), FirstLine: line, By: by,
		})
	}
	return nil
}

// localTimes are the times of a column as its clock showed them, by the number of
// the record. line is where the first one stands that a clock change repeats, 0
// if there is none.
func (im *importer) localTimes(f *file, i int) (local []int64, line int, err error) {
	t := im.columns[i].time
	s := f.records()
	for n := 0; s.next(); n++ {
		if n&1023 == 0 && im.ctx.Err() != nil {
			return nil, 0, im.ctx.Err()
		}
		local = append(local, timeform.Absent)
		if f.skips(s) {
			continue
		}
		if _, bad := im.recordFault(s, f); bad {
			continue
		}
		b := trim(s.rec.fields[f.fieldOf(i)].text)
		if im.isNull(b) {
			continue
		}
		us, outcome := t.Form.Read(b)
		if outcome != timeform.OK {
			continue
		}
		local[n] = us
		if _, _, outcome := t.Zone.Instants(us); outcome == timeform.Repeats && line == 0 {
			line = s.rec.line
		}
	}
	return local, line, nil
}

// fieldOf is the field that holds column i of the table.
func (f *file) fieldOf(i int) int {
	for k, c := range f.column {
		if c == i {
			return k
		}
	}
	panic("csv: a column that no field holds")
}

// groups numbers the records by their text in the key number k among the columns
// that may tell loggers apart; ok is false where there are not so many.
func (im *importer) groups(f *file, k, records int) (group []uint32, name string, ok bool) {
	for i := range im.fileColumns() {
		c := &im.columns[i]
		if t := im.types[i]; t != column.Text && t != column.Integer || c.unit != nil {
			continue
		}
		if k--; k >= 0 {
			continue
		}
		group = make([]uint32, 0, records)
		number := map[string]uint32{}
		field := f.fieldOf(i)
		for s := f.records(); s.next(); {
			text := ""
			if field < len(s.rec.fields) {
				text = string(s.rec.fields[field].text)
			}
			g, known := number[text]
			if !known {
				g = uint32(len(number))
				number[text] = g
			}
			group = append(group, g)
		}
		return group, im.columns[i].name, true
	}
	return nil, "", false
}
