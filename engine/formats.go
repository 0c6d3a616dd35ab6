package engine

import (
	"path/filepath"
	"slices"
	"strings"

	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
	"nearcell/catalog/reader/jsonl"
	"nearcell/catalog/reader/las"
	"nearcell/catalog/reader/packed"
	"nearcell/catalog/reader/parquet"
	"nearcell/catalog/reader/ply"
	"nearcell/catalog/reader/xlsx"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// format is one that files are read in.
type format struct {
	name    string
	read    reader.Reader
	clauses []string // of those that say how a file is written, the ones that apply
}

// The formats. Files without a known ending are read as delimited text, since loggers
// write .txt and .dat.
var (
	delimited = &format{"delimited text", csv.Reader{}, []string{"DELIMITER", "DECIMAL", "MISSING", "REFUSED", "HEADING", "ENCODING", "TIME", "PREAMBLE", "CENSORED", "UNPIVOT"}}
	asBook    = &format{"a workbook", xlsx.Reader{}, []string{"DECIMAL", "MISSING", "REFUSED", "HEADING", "SHEET", "TIME", "PREAMBLE", "CENSORED", "UNPIVOT"}}
	asJSON    = &format{"JSON", jsonl.Reader{}, []string{"MISSING", "REFUSED", "TIME", "CENSORED", "UNPIVOT"}}

	typed     = []string{"UNPIVOT"}
	asParquet = &format{"Parquet", parquet.Reader{}, typed}
	asLAS     = &format{"LAS", las.Reader{}, typed}
	asPLY     = &format{"PLY", ply.Reader{}, typed}
)

var formats = map[string]*format{
	".xlsx": asBook, ".xlsm": asBook, ".jsonl": asJSON, ".ndjson": asJSON, ".json": asJSON,
	".parquet": asParquet, ".pq": asParquet, ".las": asLAS, ".ply": asPLY,
}

// otherFormats are those that are known and not read, with the way out.
var otherFormats = map[string]string{
	".xls":  "save it as .xlsx or as .csv",
	".xlsb": "save it as .xlsx or as .csv",
	".ods":  "save it as .xlsx or as .csv",
	".laz":  "LAZ is compressed: unpack it into .las with the tool that made it or one for point clouds",
	".e57":  "export it as .las, .ply or .csv",
	".zip":  "unpack it; .gz and .zst are read as they are",
	".7z":   "unpack it; .gz and .zst are read as they are",
	".tar":  "unpack it; .gz and .zst are read as they are",
	".tgz":  "unpack it; .gz and .zst are read as they are",
	".bz2":  "unpack it; .gz and .zst are read as they are",
	".xz":   "unpack it; .gz and .zst are read as they are",
}

// formatOf is the format of a file by its ending.
func formatOf(at problem.Place, name string) (*format, error) {
	inner, _ := packed.Ending(name)
	ending := strings.ToLower(filepath.Ext(inner))
	if way, known := otherFormats[ending]; known {
		return nil, problem.New("import", at, "'%s' was not imported: files that end with %s are not read", name, ending).WithHint("%s", way)
	}
	if f := formats[ending]; f != nil {
		return f, nil
	}
	return delimited, nil
}

// suits refuses clauses that say nothing about files of the format.
func (f *format) suits(c *clauses) error {
	for _, node := range c.fileClauses {
		word := clauseWord(node)
		if slices.Contains(f.clauses, word) {
			continue
		}
		p := problem.New("clause", c.st.at(node), "%s does not apply to %s", clauseName(word), f.name)
		switch {
		case word == "SHEET":
			return p.WithHint("only workbooks (.xlsx) have sheets")
		case word == "MISSING":
			return p.WithHint("such a file says itself which values are missing; others: CREATE TABLE clean AS (SELECT NULLIF(temp, -999) AS temp FROM …)")
		case word == "REFUSED":
			return p.WithHint("only lines of text and rows of sheets can be set aside")
		}
		return p.WithHint("leave it away: the file itself says how it is written")
	}
	return nil
}

// clauseName is a clause as a user knows it.
func clauseName(word string) string {
	switch word {
	case "DECIMAL":
		return "DECIMAL MARK"
	case "REFUSED":
		return "REFUSED TO"
	case "HEADING":
		return "HEADING AT LINE"
	}
	return word
}

// unpacked is the source as it was before it was packed.
func unpacked(st *statement, file *lang.Text, source *reader.Source) (*reader.Source, error) {
	if _, is := packed.Ending(file.Value); !is {
		return source, nil
	}
	source, err := packed.Unpack(source, 0)
	if err != nil {
		return nil, importProblem(err, st.at(file), file.Value)
	}
	return source, nil
}
