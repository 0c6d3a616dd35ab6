package main

import (
	"bytes"
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine"
)

const (
	readme   = "../../README.md"
	askFence = "```sql\n"
	outFence = "```text\n"
	endFence = "```\n"
)

// TestReadme runs every block of statements of the README in one session, in the
// folder of the demo, and holds what it prints, notes included, against the block
// of text below it. With -rewrite the README gets what was printed.
func TestReadme(t *testing.T) {
	data, err := os.ReadFile(readme)
	if err != nil {
		t.Fatal(err)
	}
	var out bytes.Buffer
	folder := t.TempDir() // the tour saves a file beside the demo's
	if err := os.CopyFS(folder, os.DirFS("../../testdata/demo")); err != nil {
		t.Fatal(err)
	}
	session := engine.New(catalog.Memory(), engine.Options{Out: &out, Err: &out, Quiet: true})
	ctx := context.Background()
	if err := session.Run(ctx, "the demo's first lines", demoSetup, folder); err != nil {
		t.Fatal(out.String())
	}
	rest, written := string(data), ""
	blocks := 0
	for {
		start := strings.Index(rest, askFence)
		if start < 0 {
			break
		}
		start += len(askFence)
		length := strings.Index(rest[start:], endFence)
		if length < 0 {
			t.Fatal("a block of statements never ends")
		}
		statements := rest[start : start+length]
		end := start + length + len(endFence)
		written += rest[:end]
		rest = rest[end:]
		blocks++

		out.Reset()
		if err := session.Run(ctx, "README.md", statements, folder); err != nil && !strings.Contains(statements, "volmue") {
			t.Errorf("%s\n%s", statements, out.String())
		}
		if !strings.HasPrefix(rest, "\n"+outFence) {
			continue
		}
		body := rest[1+len(outFence):]
		length = strings.Index(body, endFence)
		if got := strings.TrimPrefix(out.String(), "\n"); got != body[:length] && !*rewrite {
			t.Errorf("the README says\n%s\nbut the program prints\n%s", body[:length], got)
		}
		written += "\n" + outFence + strings.TrimPrefix(out.String(), "\n") + endFence
		rest = body[length+len(endFence):]
	}
	samePicture(t, filepath.Join(folder, "floor.svg"), filepath.Join("testdata", "floor.svg"))
	if blocks < 8 {
		t.Errorf("only %d blocks of statements found", blocks)
	}
	if *rewrite {
		if err := os.WriteFile(readme, []byte(written+rest), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// demoSetup is what the README's tour takes as done by the demo script.
const demoSetup = `
LET upper = 8;
CREATE SOLID air AS PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18))
  HOLE ((0, 0), (4, 0), (4, 3), (0, 3)) FROM 0 TO 7.5;
CREATE CAMPAIGN hall FROM 'sites.csv' ID id POSITION (x, y, z) WITHIN air TOLERANCE 0.05;
CREATE TABLE log FROM 'log.csv' UNITS (temp '°C');
CREATE VIEW placed AS (SELECT id, CASE WHEN id = 'L17' THEN 13.20 ELSE x END AS x, y, z, level, place FROM hall);
CREATE VIEW readings AS (SELECT p.id, p.x, p.y, p.z, p.level, p.place, l.t, l.temp
  FROM placed p JOIN log l ON l.logger = p.id WHERE l.temp IS NOT NULL);
`

// samePicture holds a picture that the README draws against the one that it shows.
func samePicture(t *testing.T, drawn, shown string) {
	t.Helper()
	got, err := os.ReadFile(drawn)
	if err != nil {
		t.Fatal(err)
	}
	if *rewrite {
		if err := os.WriteFile(shown, got, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	if want, err := os.ReadFile(shown); err != nil || !bytes.Equal(got, want) {
		t.Errorf("the README shows another picture than it draws (%v)", err)
	}
}
