package main

import (
	"bytes"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
)

// seed is the one number from which all random streams start.
const seed = 20310407

func main() {
	to := flag.String("to", filepath.Join("testdata", "demo"), "folder to write into")
	flag.Parse()
	if err := write(*to); err != nil {
		fmt.Fprintln(os.Stderr, "demodata:", err)
		os.Exit(1)
	}
}

// file is one file of the demo, in memory.
type file struct {
	name string
	text []byte
}

// write makes all files first and then puts them into the folder, so that a
// generator that fails leaves the old ones alone.
func write(folder string) error {
	files, err := generate()
	if err != nil {
		return err
	}
	for _, f := range files {
		if strings.Contains(f.name, "/") {
			if err := os.MkdirAll(filepath.Join(folder, filepath.Dir(f.name)), 0o755); err != nil {
				return err
			}
		}
		if err := os.WriteFile(filepath.Join(folder, f.name), f.text, 0o644); err != nil {
			return err
		}
	}
	return nil
}

// generate makes the files of the demo.
func generate() ([]file, error) {
	var files []file
	var f fence
	add := func(name string, make func(*bytes.Buffer, *fence)) {
		var b bytes.Buffer
		make(&b, &f)
		files = append(files, file{name, b.Bytes()})
	}
	before, after := firstCampaign(), secondCampaign()
	add("sites.csv", before.writeSites)
	add("log.csv", before.writeLog)
	add("sites2.csv", after.writeSites)
	add("log2.csv", after.writeLog)
	add("walk.csv", func(b *bytes.Buffer, f *fence) { writeWalk(b, f, before) })
	add("hall4.obj", func(b *bytes.Buffer, _ *fence) { writeMesh(b) })
	add("racks.csv", func(b *bytes.Buffer, _ *fence) { writeRacks(b) })
	autumn := newRaw(&f)
	for _, l := range autumn.loggers {
		add("export/"+l.id()+".csv", func(b *bytes.Buffer, f *fence) { autumn.writeExport(b, f, l) })
	}
	add("certificates.csv", autumn.writeCalibration)
	add("clocks.csv", autumn.writeClocks)
	add("control.csv", writeControl)
	add("places.csv", autumn.writePlaces)
	add("exclusions.csv", autumn.writeExclusions)
	return files, f.err
}
