package main

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestAutumn runs the demo's path from raw exports to verdicts, as an engineer signs
// it. The generator knows what has to come out: eighteen loggers of which only the
// silent S12 and the exchanged S05 and S14 lack readings (each of 660 quarters of an
// hour from 9:00 on the 20th to 6:00 on the 27th; S12's last one is that before 13:20
// on the 24th), no reading lost or doubled in the night when the clocks are put back,
// and a room of 3420 m³ with racks of 8 times 28.8 m³ at 659 instants: at the first one
// no logger has read yet. The drawing's millimetres are the hall's metres exactly.
func TestAutumn(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "demo")
	if err := os.CopyFS(folder, os.DirFS(filepath.Join("..", "..", "testdata", "demo"))); err != nil {
		t.Fatal(err)
	}
	var first string
	for _, threads := range []string{"1", "2"} {
		var out, words bytes.Buffer
		code := execute([]string{"--no-catalog", "--quiet", "--threads", threads, "--as", "csv", "run", filepath.Join(folder, "autumn.ncell")},
			strings.NewReader(""), &out, &words)
		if code != exitUnmet {
			t.Fatalf("exit code %d, want %d\n%s%s", code, exitUnmet, out.String(), words.String())
		}
		for _, want := range []string{
			"\nS12,2031-10-20", ",660,401,0.6076,1,", ",660,657,0.9955,1,",
			"P1 no logger is in two places at once,PASS,0,",
			"A1 99 % of the readings of each logger,FAIL,1,",
			"A2 the air of the hall is between 2 and 8 °C on average,PASS,,",
			"A3 nothing above 8 °C for over 30 min,FAIL,",
			"A4 no more than 1 % of the storage above 8 °C, by space and time\",FAIL,,",
			"A5 nothing below 0 °C,PASS,0,",
		} {
			if !strings.Contains(out.String(), want) {
				t.Errorf("the answers lack %q:\n%s", want, out.String())
			}
		}
		if n := strings.Count(out.String(), ",660,"); n != 3 {
			t.Errorf("%d loggers lack readings, want 3", n)
		}
		for _, want := range []string{"of 659 partitions of air, 2253780 m³ together, all is answered for",
			"scaled by 0.001, turned by 90°, mirrored, heights as they are; off by 0 m on the whole of its points",
			"of 659 partitions of rack A, rack B, rack C, rack D, rack E and 3 more, 151834 m³ together, all is answered for", "136 rows, the first in line",
			"FAIL: A3 nothing above 8 °C", "chosen on the first 330 values of t"} {
			if !strings.Contains(words.String(), want) {
				t.Errorf("the words lack %q:\n%s", want, words.String())
			}
		}
		if strings.Contains(words.String(), "warning:") {
			t.Errorf("there is a warning: %s", words.String())
		}
		for _, name := range []string{"floor", "door", "height", "week", "air"} {
			picture, err := os.ReadFile(filepath.Join(folder, "autumn-"+name+".svg"))
			if err != nil {
				t.Error(err)
			}
			out.Write(picture)
		}
		if first == "" {
			first = out.String()
		} else if first != out.String() {
			t.Error("two threads give other bytes than one")
		}
	}
	data, err := os.ReadFile(filepath.Join(folder, "autumn-verdicts.csv.provenance.json"))
	if err != nil {
		t.Fatal(err)
	}
	var p struct {
		Inputs []struct {
			Name  string
			Files []struct{ Path, SHA256 string }
		}
		Requirements []struct{ Requirement, Verdict string }
	}
	if err := json.Unmarshal(data, &p); err != nil {
		t.Fatal(err)
	}
	files := 0
	for _, in := range p.Inputs {
		files += len(in.Files)
	}
	if len(p.Requirements) != 6 || files != 24 { // 18 exports, certificates, clocks, control points, places, exclusions, racks
		t.Errorf("the provenance of the verdicts names %d requirements and %d files:\n%s", len(p.Requirements), files, data)
	}
}
