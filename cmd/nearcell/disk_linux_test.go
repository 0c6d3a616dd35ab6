package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"golang.org/x/sys/unix"
)

// smallDisk is a folder on a file system of its own with room for so many bytes.
// It needs the right to mount one; without it the test is skipped.
func smallDisk(t *testing.T, size string) string {
	t.Helper()
	folder := t.TempDir()
	if err := unix.Mount("tmpfs", folder, "tmpfs", 0, "size="+size); err != nil {
		t.Skipf("no small disk can be mounted here: %v", err)
	}
	t.Cleanup(func() { unix.Unmount(folder, unix.MNT_DETACH) })
	return folder
}

// call runs the program and gives its exit code and what it printed.
func call(args ...string) (code int, out, errOut string) {
	var o, e bytes.Buffer
	code = execute(args, strings.NewReader(""), &o, &e)
	return code, o.String(), e.String()
}

// TestFullDisk fills a disk: what was there stays whole, the message names the
// file, and no half file is left behind.
func TestFullDisk(t *testing.T) {
	disk := smallDisk(t, "256k")
	saved := filepath.Join(disk, "saved.csv")
	catalog := filepath.Join(disk, "catalog")
	log, err := filepath.Abs("../../testdata/demo/log.csv")
	if err != nil {
		t.Fatal(err)
	}
	create := "CREATE TABLE small AS (SELECT 1 AS n);"
	if code, _, e := call("--catalog", catalog, "ask", create+"SAVE SELECT 1 AS n TO '"+saved+"';"); code != exitFine {
		t.Fatal(e)
	}
	before, err := os.ReadFile(saved)
	if err != nil {
		t.Fatal(err)
	}

	code, _, e := call("--catalog", catalog, "ask", "CREATE TABLE log FROM '"+log+"';")
	if code != exitFailed || !strings.Contains(e, "no space left") {
		t.Errorf("a catalog on a full disk: exit code %d, %s", code, e)
	}
	code, _, e = call("--no-catalog", "ask", "CREATE TABLE log FROM '"+log+"'; SAVE SELECT * FROM log TO '"+saved+"' OVERWRITE;")
	if code != exitFailed || !strings.Contains(e, "saved.csv' cannot be written: no space left") {
		t.Errorf("SAVE on a full disk: exit code %d, %s", code, e)
	}
	if after, err := os.ReadFile(saved); err != nil || !bytes.Equal(before, after) {
		t.Errorf("the saved file is no longer what it was: %q, %v", after, err)
	}
	entries, err := os.ReadDir(disk)
	if err != nil || len(entries) != 2 {
		t.Errorf("left on the disk: %v, %v", entries, err)
	}
	if code, out, e := call("--catalog", catalog, "--as", "csv", "ask", "SELECT n FROM small;"); code != exitFine || out != "n\n1\n" {
		t.Errorf("the catalog afterwards: exit code %d, %s%s", code, out, e)
	}
	if code, _, e := call("--catalog", catalog, "ask", "SELECT * FROM log;"); code != exitFailed || !strings.Contains(e, "'log'") {
		t.Errorf("half a table: exit code %d, %s", code, e)
	}
}

// TestReadOnlyFolder reads from a catalog that nobody may write, and says so
// when something is to be kept.
func TestReadOnlyFolder(t *testing.T) {
	disk := smallDisk(t, "1m")
	catalog := filepath.Join(disk, "catalog")
	if code, _, e := call("--catalog", catalog, "ask", "CREATE TABLE t AS (SELECT 7 AS n);"); code != exitFine {
		t.Fatal(e)
	}
	if err := unix.Mount("", disk, "", unix.MS_REMOUNT|unix.MS_RDONLY, ""); err != nil {
		t.Skipf("no disk can be made read-only here: %v", err)
	}
	if code, out, e := call("--catalog", catalog, "--as", "csv", "ask", "SELECT n FROM t;"); code != exitFine || out != "n\n7\n" {
		t.Errorf("reading: exit code %d, %s%s", code, out, e)
	}
	for _, statement := range []string{
		"CREATE TABLE u AS (SELECT 8 AS n);", "DROP TABLE t;", "SAVE SELECT 1 AS n TO '" + filepath.Join(disk, "x.csv") + "';",
	} {
		if code, _, e := call("--catalog", catalog, "ask", statement); code != exitFailed || !strings.Contains(e, "read-only") {
			t.Errorf("%s: exit code %d, %s", statement, code, e)
		}
	}
}

// TestReadOnlyDiagrams answers from diagrams in a catalog that nobody may write, and
// keeps none there, without a word; what a later version has written is told and left.
func TestReadOnlyDiagrams(t *testing.T) {
	disk := smallDisk(t, "16m")
	catalog, sites := filepath.Join(disk, "catalog"), filepath.Join(t.TempDir(), "sites.csv")
	scatter(t, sites)
	const volumes, areas = "SELECT SUM(volume) AS v FROM CELLS OF hall;", "SELECT SUM(area) AS a FROM CELLS OF hall;"
	code, first, e := call("--catalog", catalog, "--as", "csv", "ask", "CREATE CAMPAIGN hall FROM '"+sites+"' WITHIN BOX (0, 0, 0) TO (30, 18, 7);"+volumes)
	if code != exitFine {
		t.Fatal(e)
	}
	list := func() string {
		_, out, _ := call("--catalog", catalog, "--as", "csv", "ask", "LIST DIAGRAMS;")
		return out
	}
	if !strings.Contains(list(), `,hall,"BOX (0, 0, 0) TO (30, 18, 7)",20000,"tetrahedra, volume",`) {
		t.Error(list())
	}
	if err := unix.Mount("", disk, "", unix.MS_REMOUNT|unix.MS_RDONLY, ""); err != nil {
		t.Skipf("no disk can be made read-only here: %v", err)
	}
	code, again, e := call("--catalog", catalog, "--as", "csv", "ask", volumes)
	if code != exitFine || again != first || strings.Contains(e, "kept") {
		t.Errorf("exit code %d, %s for %s, %s", code, again, first, e)
	}
	if code, _, e := call("--catalog", catalog, "--as", "csv", "ask", areas); code != exitFine || strings.Contains(e, "kept") || strings.Contains(list(), "area") {
		t.Errorf("exit code %d, %s, %s", code, e, list())
	}
	for _, statement := range []string{"DROP DIAGRAMS;", "SET CACHE '1GiB';"} {
		if code, _, e := call("--catalog", catalog, "ask", statement); code != exitFailed || !strings.Contains(e, "read-only") {
			t.Errorf("%s exit code %d, %s", statement, code, e)
		}
	}
	if err := unix.Mount("", disk, "", unix.MS_REMOUNT, ""); err != nil {
		t.Fatal(err)
	}
	manifest := filepath.Join(catalog, "diagrams", "manifest.json")
	text, err := os.ReadFile(manifest)
	if err != nil {
		t.Fatal(err)
	}
	newer := bytes.Replace(text, []byte(`"version": 1`), []byte(`"version": 9`), 1)
	if err := os.WriteFile(manifest, newer, 0o666); err != nil {
		t.Fatal(err)
	}
	code, again, e = call("--catalog", catalog, "--as", "csv", "ask", volumes)
	if code != exitFine || again != first || !strings.Contains(e, "later version") {
		t.Errorf("exit code %d, %s for %s, %s", code, again, first, e)
	}
	if left, err := os.ReadFile(manifest); err != nil || !bytes.Equal(left, newer) {
		t.Errorf("a later version's list was changed: %v", err)
	}
}

// TestFullOutput has a result that the standard output does not take.
func TestFullOutput(t *testing.T) {
	full, err := os.OpenFile("/dev/full", os.O_WRONLY, 0)
	if err != nil {
		t.Skip(err)
	}
	defer full.Close()
	var e bytes.Buffer
	code := execute([]string{"--no-catalog", "--as", "csv", "ask", "SELECT 1 AS n;"}, strings.NewReader(""), full, &e)
	if code != exitFailed || !strings.Contains(e.String(), "no space left") {
		t.Errorf("exit code %d, %s", code, e.String())
	}
}
