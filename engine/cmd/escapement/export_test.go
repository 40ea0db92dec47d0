package main

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestExportAndReportWriteByTheEndingOfTheName(t *testing.T) {
	dir := t.TempDir()
	for _, c := range []struct{ name, begins, has string }{
		{"a.edf", "0       X X X X ", "ECG II          ECG V5          EDF Annotations"},
		{"a.csv", "event,time_ms,kind", "\r\n"},
		{"a.json", "{\n \"format\": \"escapement-strip/1\"", "\"plan\": {"},
		{"a.pdf", "%PDF", "/Page"},
	} {
		path := filepath.Join(dir, c.name)
		args := []string{"export", "pvc-retrograde", "-o", path}
		switch filepath.Ext(c.name) {
		case ".edf":
			args = append(args, "-leads", "II,V5")
		case ".pdf":
			args[0] = "report"
		}
		if _, err := call(t, "", args...); err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		b, err := os.ReadFile(path)
		if err != nil || !bytes.HasPrefix(b, []byte(c.begins)) || !bytes.Contains(b, []byte(c.has)) {
			t.Errorf("%s begins %.60q and holds %q: %v (%v)", c.name, b, c.has, bytes.Contains(b, []byte(c.has)), err)
		}
	}
}

func TestBadExportsAndReportsAreExplained(t *testing.T) {
	dir := t.TempDir()
	at := func(name string) string { return filepath.Join(dir, name) }
	for _, c := range []struct {
		name, want string
		args       []string
	}{
		{"no plan", "export takes a plan", []string{"export", "-o", at("x.edf")}},
		{"no file", "ends in .edf, .csv or .json", []string{"export", "normal"}},
		{"ending", `ends in ".txt"; it can be .edf, .csv or .json`, []string{"export", "normal", "-o", at("x.txt")}},
		{"lead", `export: "V7" is not a lead`, []string{"export", "normal", "-o", at("x.edf"), "-leads", "V7"}},
		{"start", `start "noon"; it is written as 2026-12-01T08:30:00`, []string{"export", "normal", "-o", at("x.edf"), "-start", "noon"}},
		{"paper", "a4, letter, a3", []string{"report", "normal", "-o", at("x.pdf"), "-paper", "foolscap"}},
		{"tiers", `tiers "some"; they can be full, plain or none`, []string{"report", "normal", "-o", at("x.pdf"), "-tiers", "some"}},
		{"report's ending", `ends in ".edf"; it can be .pdf, .svg or .png`, []string{"report", "normal", "-o", at("x.edf")}},
		{"the other plan", "neither a file nor a preset", []string{"report", "normal", "-o", at("x.pdf"), "-before", "nothing"}},
	} {
		_, err := call(t, "", c.args...)
		var bad *usageError
		if err == nil || !errors.As(err, &bad) || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: got %v, want %q", c.name, err, c.want)
		}
	}
	if left, _ := os.ReadDir(dir); len(left) > 0 {
		t.Errorf("refused calls left %v", left)
	}
}
