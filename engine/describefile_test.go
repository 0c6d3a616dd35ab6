package engine_test

import (
	"bytes"
	"context"
	"encoding/csv"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog"
	"nearcell/engine"
	"nearcell/engine/present"
)

// offered runs DESCRIBE FILE and gives the statement that it offers, and the notes.
func offered(t interface{ Fatalf(string, ...any) }, folder, file string) (statement, notes string, err error) {
	var out, said bytes.Buffer
	s := engine.New(catalog.Memory(), engine.Options{Out: &out, Err: &said, Format: present.AsCSV, Quiet: true})
	if err := s.Run(context.Background(), "test", "DESCRIBE FILE '"+strings.ReplaceAll(file, "'", "''")+"';", folder); err != nil {
		return "", said.String(), err
	}
	_, last, ok := strings.Cut(out.String(), "\nstatement\n")
	if !ok {
		t.Fatalf("%s: no statement in %q", file, out.String())
	}
	rows, err := csv.NewReader(strings.NewReader(last)).ReadAll()
	if err != nil || len(rows) != 1 {
		t.Fatalf("%s: %q", file, last)
	}
	return rows[0][0], said.String(), nil
}

// paste runs an offered statement in a session of its own; it returns how many
// rows the thing then has.
func paste(t interface{ Fatalf(string, ...any) }, folder, statement string) int {
	var out, said bytes.Buffer
	s := engine.New(catalog.Memory(), engine.Options{Out: &out, Err: &said, Format: present.AsCSV, Quiet: true})
	name := strings.Fields(statement)[2]
	if err := s.Run(context.Background(), "test", statement+"\nSELECT COUNT(*) AS n FROM "+name+";", folder); err != nil {
		t.Fatalf("%s\n%s", statement, said.String())
	}
	rows := 0
	if _, err := fmt.Sscanf(out.String(), "n\n%d\n", &rows); err != nil {
		t.Fatalf("%s: %q", statement, out.String())
	}
	return rows
}

// What DESCRIBE FILE offers runs as it stands, for every file that the project
// has, good and bad. One file has nothing in it.
func TestDescribedFilesCanBeRead(t *testing.T) {
	folder := t.TempDir()
	files := 0
	for _, pattern := range []string{"../testdata/*/*.csv", "../testdata/*/*/*.csv", "problem/catalogue/testdata/*.csv"} {
		paths, err := filepath.Glob(pattern)
		if err != nil {
			t.Fatal(err)
		}
		for _, path := range paths {
			data, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			name := fmt.Sprintf("%d-%s", files, filepath.Base(path)) // a place of its own for refused lines
			if err := os.WriteFile(filepath.Join(folder, name), data, 0o600); err != nil {
				t.Fatal(err)
			}
			files++
			statement, notes, err := offered(t, folder, name)
			if len(data) == 0 {
				if err == nil || !strings.Contains(notes, "the file is empty") {
					t.Errorf("%s: %s", name, notes)
				}
				continue
			}
			if err != nil {
				t.Errorf("%s: %s", path, notes)
				continue
			}
			lines := bytes.Count(bytes.TrimRight(data, "\n"), []byte("\n"))
			if rows := paste(t, folder, statement); rows > lines || rows < lines*3/4-1 {
				t.Errorf("%s: %d rows of %d lines by\n%s", path, rows, lines, statement)
			}
		}
	}
	if files < 20 {
		t.Fatalf("only %d files", files)
	}
}

// Files as loggers write them, put together by chance, all INVENTED.
func TestDescribedExports(t *testing.T) {
	folder := t.TempDir()
	rapid.Check(t, func(t *rapid.T) {
		var b strings.Builder
		d := rapid.SampledFrom([]string{",", ";", "\t", "|"}).Draw(t, "delimiter")
		comma := d != "," && rapid.Bool().Draw(t, "decimal comma")
		number := func() string {
			s := fmt.Sprintf("%.2f", rapid.Float64Range(-20, 40).Draw(t, "value"))
			if comma {
				s = strings.ReplaceAll(s, ".", ",")
			}
			return s
		}
		end := rapid.SampledFrom([]string{"\n", "\r\n"}).Draw(t, "line end")
		tail := rapid.SampledFrom([]string{"", "", d}).Draw(t, "at the end of a line")
		preamble := rapid.SampledFrom([]int{0, 0, 2, 14}).Draw(t, "preamble")
		for i := range preamble {
			if i < 5 {
				b.WriteString([]string{"Serial: 0012", "Model" + d + "Polarfuchs", "Place: rack A", "", "Interval: 15 min"}[i] + end)
			} else {
				fmt.Fprintf(&b, "Line %d: %d%s", i, i, end)
			}
		}
		pattern := rapid.SampledFrom([]string{"%02d.04.2031 %02d:15", "2031-04-%02d %02d:15:00", "%d/4/2031 %d:15", "04/%02d/2031 %02d:15:00 AM"}).Draw(t, "time")
		names := rapid.SampledFrom([][]string{{"t", "temp", "rh"}, {"Time", "Temp (°C)", "x"}, {"t", "temp [°C]", "select"}}).Draw(t, "names")
		b.WriteString(strings.Join(names, d) + tail + end)
		if rapid.Bool().Draw(t, "a line of units") {
			b.WriteString(d + "°C" + d + "%" + tail + end)
		}
		missing := rapid.SampledFrom([]string{"", "---", "n/a", "NaN", "err"}).Draw(t, "missing")
		rows := rapid.IntRange(6, 40).Draw(t, "rows")
		for i := range rows {
			value := number()
			if i > 3 && rapid.IntRange(0, 9).Draw(t, "is missing") == 0 {
				value = missing
			}
			b.WriteString(fmt.Sprintf(pattern, i/12+1, i%12+1) + d + value + d + number() + tail + end)
		}
		if err := os.WriteFile(filepath.Join(folder, "it's.csv"), []byte(b.String()), 0o600); err != nil {
			t.Fatalf("%v", err)
		}
		statement, notes, err := offered(t, folder, "it's.csv")
		if err != nil {
			t.Fatalf("%s\n%s", b.String(), notes)
		}
		if got := paste(t, folder, statement); got != rows {
			t.Fatalf("%d rows of %d by\n%s\nfrom\n%s", got, rows, statement, b.String())
		}
		for _, clause := range []struct {
			word string
			want bool
		}{{"TIME (", !strings.HasPrefix(pattern, "2031-")}, {"HEADING AT LINE", preamble > 0}, {"DECIMAL MARK", comma}, {"PREAMBLE (", preamble > 0}, {"REFUSED TO", false}} {
			if strings.Contains(statement, clause.word) != clause.want {
				t.Fatalf("%s in\n%s\nfor\n%s", clause.word, statement, b.String())
			}
		}
	})
}

// What is offered for a few files, and what is said about them.
func TestOfferedStatements(t *testing.T) {
	for _, c := range []struct{ name, text, statement, notes string }{
		{
			"dust", "place,dust [mg/m3],grade\nA,<0.1,<A\nB,0.3,B\nC,n/a,C\nD,> 5,A\n",
			`CREATE TABLE dust FROM 'dust.csv'
  MISSING ('n/a')
  CENSORED (dust);`, "'<0.1' in dust says between what bounds the value lies: CENSORED reads them as dust_low and dust_high",
		},
		{
			"assay", "hole;au;au_low\nA;<0,1;1\nB;0,3;2\n",
			`CREATE TABLE assay FROM 'assay.csv'
  DELIMITER ';'
  DECIMAL MARK ',';`, "",
		},
		{
			"lead", "hole;pb\nA;≤0,1\nB;0,3\n",
			`CREATE TABLE lead FROM 'lead.csv'
  DELIMITER ';'
  DECIMAL MARK ','
  CENSORED (pb);`, "pb_low and pb_high",
		},
		{
			"sites", "logger;X (m);Y (m);Depth (m);Temp (°C)\nA1;1,5;2,25;3;4,5\nA2;2,5;2,5;3;n/a\nA3;2,5;3,5;3;4,1\nA4;3;3;3;4,2\n",
			"CREATE CAMPAIGN sites FROM 'sites.csv'\n  ID logger\n  POSITION (\"X (m)\", \"Y (m)\", -\"Depth (m)\")\n  DELIMITER ';'\n  DECIMAL MARK ','\n" +
				"  MISSING ('n/a')\n  UNITS (\"X (m)\" 'm', \"Y (m)\" 'm', \"Depth (m)\" 'm', \"Temp (°C)\" '°C');",
			"read as missing, in every column: 'n/a'",
		},
		{
			"gap", "id,x,y,z\nL01,1,2,3\nL02,1,,3\n",
			"CREATE TABLE gap FROM 'gap.csv';", "some rows have no whole position",
		},
		{
			"again", "x,y,z,temp\n1,2,3,4\n1,2,3,5\n1,2,3,6\n",
			"CREATE TABLE again FROM 'again.csv';", "most positions come again",
		},
		{
			"2 halls", "day,v\n04/05/2031,1\n04/06/2031,2\n",
			"CREATE TABLE file_2_halls FROM '2 halls.csv'\n  TIME (day 'DD/MM/YYYY');", "do not tell whether its pattern is 'DD/MM/YYYY' or 'MM/DD/YYYY'",
		},
		{
			"select", "sep=;\nx_km;y_km;z_km;id\n1,5;2;3;7\n1,5;3;3;8\n",
			"CREATE CAMPAIGN \"select\" FROM 'select.csv'\n  ID id\n  POSITION (x_km, y_km, z_km)\n  COORDINATES IN km\n  HEADING AT LINE 2\n  DELIMITER ';'\n  DECIMAL MARK ',';",
			"the heading is line 2; before it stands 1 line: 'sep=;'",
		},
		{
			"codes", "id,v\n1,1\n2,2\n3,3\n4,4\n5,5A\n",
			"CREATE TABLE codes FROM 'codes.csv'\n  REFUSED TO 'codes-refused.csv';", "1 line at fault would be set aside; the first: line 6 column 3: '5A' in column 'v' is no number",
		},
	} {
		folder := t.TempDir()
		if err := os.WriteFile(filepath.Join(folder, c.name+".csv"), []byte(c.text), 0o600); err != nil {
			t.Fatal(err)
		}
		statement, notes, err := offered(t, folder, c.name+".csv")
		if err != nil || statement != c.statement || !strings.Contains(notes, c.notes) {
			t.Errorf("%s:\n%s\n%s", c.name, statement, notes)
			continue
		}
		paste(t, folder, statement)
	}
}
