package engine

import (
	"bytes"
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine/present"
)

// TestCensored: a dust walk by hand. Sorted, the values are 0.2, <0.5, 0.6, 0.8, 2.4
// and >5 mg/m³; one is missing. The mean of the lower bounds is (0.2 + 0 + 0.6 + 0.8
// + 2.4 + 5)/6 = 1.5. The third smallest of six is the median: 0.6 for the upper
// bounds (0.2, 0.5, 0.6, …) and 0.6 for the lower ones (0, 0.2, 0.6, …). The second
// is 0.5 or 0.2: no answer.
func TestCensored(t *testing.T) {
	folder := t.TempDir()
	files := map[string]string{
		"dust.csv":  "id,dust [mg/m3],level\nL1,0.8,floor\nL2,<0.5,floor\nL3,2.4,desk\nL4,>5,desk\nL5,0.6,desk\nL6,0.2,floor\nL7,n/a,desk\n",
		"comma.csv": "id;dust\nL1;0,8\nL2;< 0,5\n",
		"bad.csv":   "id,dust\nL1,0.8\nL2,traces\n",
		"wide.csv":  "t,a,b\n1,<0.5,0.7\n2,0.9,>3\n",
		"taken.csv": "id,dust,dust_low\nL1,<1,2\n",
		"whole.csv": "id,dust\nL1,4\nL2,5\n",
	}
	for name, text := range files {
		if err := os.WriteFile(filepath.Join(folder, name), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	const walk = "CREATE TABLE walk FROM 'dust.csv' CENSORED (dust) MISSING 'n/a'; "
	for query, want := range map[string]string{
		walk + "SELECT * FROM walk WHERE id = 'L2' OR id = 'L4' OR id = 'L7' ORDER BY id":                                                                     "id,dust,dust_low,dust_high,level\nL2,<0.5,0,0.5,floor\nL4,>5,5,Infinity,desk\nL7,,,,desk\n",
		walk + "SELECT ROUND(AVG(dust_low), 9) AS low, AVG(dust_high) AS high, COUNT(dust) AS n FROM walk":                                                    "low,high,n\n1.5,Infinity,6\n",
		walk + "SELECT MEDIAN(dust) AS m, QUANTILE(dust, 0.3) AS q, QUANTILE(w.dust, 0.6) AS r FROM walk w":                                                   "m,q,r\n0.6,,0.8\n",
		walk + "SELECT level, QUANTILE(dust, 1) AS top FROM walk GROUP BY level":                                                                              "level,top\ndesk,\nfloor,0.8\n",
		walk + "SELECT level, MEDIAN(dust) WEIGHTED BY 2 AS m FROM walk GROUP BY level HAVING MEDIAN(dust) > 0.1":                                             "level,m\ndesk,2.4\n",
		walk + "SELECT id FROM walk WHERE dust_high < 0.7 ORDER BY id":                                                                                        "id\nL2\nL5\nL6\n",
		"CREATE TABLE c FROM 'comma.csv' CENSORED (dust) DECIMAL MARK ','; SELECT dust, dust_high FROM c":                                                     "dust,dust_high\n\"0,8\",0.8\n\"< 0,5\",0.5\n",
		"CREATE TABLE u FROM 'wide.csv' UNPIVOT (dust FOR logger IN (a, b)) CENSORED (dust); SELECT t, logger, dust_low, dust_high FROM u ORDER BY t, logger": "t,logger,dust_low,dust_high\n1,a,0,0.5\n1,b,0.7,0.7\n2,a,0.9,0.9\n2,b,3,Infinity\n",
		"CREATE TABLE w FROM 'whole.csv' CENSORED (dust); SELECT SUM(dust_low) AS s FROM w":                                                                   "s\n9\n",
	} {
		got, words := censoredRun(folder, query)
		if got != want {
			t.Errorf("%s\ngives %s\nwant %s\n%s", query, got, want, words)
		}
	}
	for query, want := range map[string]string{
		walk + "SELECT AVG(dust) FROM walk":                    "'dust' has values that are only bounds: AVG needs dust_low or dust_high",
		walk + "SELECT MAX(w.dust) FROM walk w":                "MAX needs dust_low or dust_high",
		walk + "SELECT MIN(dust) FROM walk":                    "MIN needs dust_low or dust_high",
		"CREATE TABLE b FROM 'bad.csv' CENSORED (dust)":        "bad.csv:3",
		"CREATE TABLE b FROM 'dust.csv' CENSORED (dusk)":       "dust",
		"CREATE TABLE b FROM 'taken.csv' CENSORED (dust)":      "CENSORED makes a column 'dust_low'",
		"CREATE TABLE b AS (SELECT 1 AS dust) CENSORED (dust)": "CENSORED says how a file is read",
	} {
		if _, words := censoredRun(folder, query); !strings.Contains(words, want) {
			t.Errorf("%s says %s, want %s", query, words, want)
		}
	}
	if _, words := censoredRun(folder, walk+"DESCRIBE walk; SELECT MEDIAN(dust) FROM walk"); !strings.Contains(words, "MEDIAN(dust) is NULL where dust_low and dust_high do not agree on it") {
		t.Errorf("a quantile of bounds says %s", words)
	}
	if got, words := censoredRun(folder, walk+"DESCRIBE walk"); !strings.Contains(got, "dust_high,REAL,mg·m⁻³,1,") {
		t.Errorf("the bounds are described as %s %s", got, words)
	}
}

func censoredRun(folder, text string) (out, words string) {
	var o, w bytes.Buffer
	s := New(catalog.Memory(), Options{Out: &o, Err: &w, Quiet: true, Format: present.AsCSV})
	if s.Run(context.Background(), "input", text+";", folder) != nil {
		return "", w.String()
	}
	return o.String(), w.String()
}
