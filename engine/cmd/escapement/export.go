package main

import (
	"flag"
	"fmt"
	"io"
	"path/filepath"
	"strings"
	"time"

	"escapement/engine/export"
	"escapement/engine/timeline"
)

// exporting writes a computed strip in an open format, by the ending of the file's name.
//
//	escapement export PLAN -o F.edf [-leads II,V1] [-start 2026-12-01T08:30:00]
//	escapement export PLAN -o F.csv
//	escapement export PLAN -o F.json
func exporting(args []string, in io.Reader) error {
	const takes = "export takes a plan and then -o FILE, which ends in .edf, .csv or .json"
	if len(args) == 0 || strings.HasPrefix(args[0], "-") && args[0] != "-" {
		return &usageError{takes}
	}
	var out, leads, start string
	fs := flag.NewFlagSet("export", flag.ContinueOnError)
	fs.SetOutput(io.Discard)
	fs.StringVar(&out, "o", "", "file to write: .edf, .csv or .json")
	fs.StringVar(&leads, "leads", "", "leads of an .edf, with commas; all twelve where left out")
	fs.StringVar(&start, "start", "", "when an .edf is to begin; no date where left out")
	if err := fs.Parse(args[1:]); err != nil {
		return &usageError{"export: " + err.Error()}
	}
	if fs.NArg() > 0 || out == "" {
		return &usageError{takes}
	}
	var o export.EDFOptions
	var err error
	if leads != "" {
		if o.Leads, err = leadNames("export", leads); err != nil {
			return err
		}
	}
	if start != "" {
		if o.Start, err = time.Parse("2006-01-02T15:04:05", start); err != nil {
			return &usageError{fmt.Sprintf("export: start %q; it is written as 2026-12-01T08:30:00", start)}
		}
	}
	var write func(io.Writer, *timeline.Timeline) error
	switch ext := strings.ToLower(filepath.Ext(out)); ext {
	case ".edf":
		write = func(w io.Writer, s *timeline.Timeline) error { return export.EDF(w, s, o) }
	case ".csv":
		write = export.CSV
	case ".json":
		write = export.JSON
	default:
		return &usageError{fmt.Sprintf("export: %q ends in %q; it can be .edf, .csv or .json", out, ext)}
	}
	c, err := computed(args[0], in)
	if err != nil {
		return err
	}
	return create(out, func(w io.Writer) error { return write(w, c) })
}
