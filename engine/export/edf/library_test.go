package edf

import (
	"bytes"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"escapement/engine/tick"
)

// library compiles the reader in testdata, which uses Debian's EDF library.
func library(t *testing.T) string {
	t.Helper()
	gcc, err := exec.LookPath("gcc")
	if err != nil {
		t.Skip("gcc is missing; make test installs it, or: apt-get install gcc libc6-dev libedf-dev")
	}
	program := filepath.Join(t.TempDir(), "read")
	out, err := exec.Command(gcc, "-O1", "-o", program, "testdata/read.c", "-ledf").CombinedOutput()
	if bytes.Contains(out, []byte("edflib.h")) || bytes.Contains(out, []byte("-ledf")) {
		t.Skip("the EDF library is missing; make test installs it, or: apt-get install libedf-dev")
	}
	if err != nil {
		t.Fatalf("gcc: %v\n%s", err, out)
	}
	return program
}

// Another program's library finds every sample and every annotation as written.
// Source: EDFlib, Debian package libedf-dev.
func TestTheLibraryReadsTheSame(t *testing.T) {
	program := library(t)
	for _, c := range []struct {
		name  string
		n     int
		start time.Time
		date  string
	}{
		{"whole seconds", 3000, time.Time{}, "date 1985 1 1"},
		{"an odd end", 2345, time.Date(2026, 12, 1, 10, 20, 30, 0, time.UTC), "date 2026 12 1"},
		{"short", 7, time.Time{}, "date 1985 1 1"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := &Recording{Start: c.start, Equipment: "escapement", Transducer: "computed"}
			for i, label := range []string{"ECG I", "ECG V6"} {
				mv := make([]float32, c.n)
				for k := range mv {
					mv[k] = float32(16.3 * math.Sin(float64(k*(i+1))/61))
				}
				r.Signals = append(r.Signals, Signal{label, mv})
			}
			r.Annotations = []Annotation{{0, 0, "first"}, {123456, 0, "AS"}, {123456, 1500 * tick.Millisecond, "µ, 30° – text"}, {tick.Time(c.n) * 1000, 0, "at the end"}}
			var b bytes.Buffer
			if err := Write(&b, r); err != nil {
				t.Fatal(err)
			}
			compare(t, program, b.Bytes(), r, c.date)
		})
	}
}

// compare reads a file with the library and looks at all of it.
func compare(t *testing.T, program string, file []byte, r *Recording, date string) {
	t.Helper()
	name := filepath.Join(t.TempDir(), "strip.edf")
	if err := os.WriteFile(name, file, 0o644); err != nil {
		t.Fatal(err)
	}
	out, err := exec.Command(program, name).Output()
	if err != nil {
		t.Fatalf("the library: %v\n%s", err, out)
	}
	lines := strings.Split(strings.TrimSuffix(string(out), "\n"), "\n")
	n := len(r.Signals[0].MV)
	records := (n + Rate - 1) / Rate
	want := []string{
		fmt.Sprintf("type 1 signals %d records %d duration %d", len(r.Signals), records, records*10000000),
		"patient |||X", // it shows an X as nothing, but for the name
		"equipment " + word(r.Equipment), date,
	}
	for i := range r.Signals {
		s := &r.Signals[i]
		want = append(want, fmt.Sprintf("signal %-16s|%-8s|%g|%g|%d|%d|%d", s.Label, "uV", leastStep*QuantumUV, mostStep*QuantumUV, leastStep, mostStep, records*Rate))
		for k := range records * Rate {
			want = append(want, fmt.Sprint(math.RoundToEven(float64(s.MV[min(k, n-1)])*1000/QuantumUV)))
		}
	}
	list := append(slices.Clone(r.Annotations), Annotation{Onset: tick.Time(n) * 1000, Text: "Recording ends"})
	slices.SortStableFunc(list, func(a, b Annotation) int { return int(a.Onset - b.Onset) })
	for _, a := range list {
		d := int64(-10000000)
		if a.Duration > 0 {
			d = int64(a.Duration) * 10
		}
		want = append(want, fmt.Sprintf("annotation %d %d %s", int64(a.Onset)*10, d, a.Text))
	}
	for i := range max(len(want), len(lines)) {
		if i >= len(want) || i >= len(lines) || lines[i] != want[i] {
			t.Fatalf("line %d of the library's reading:\n got %q\nwant %q", i+1, strings.Join(lines[min(i, len(lines)):min(i+3, len(lines))], "\n"), strings.Join(want[min(i, len(want)):min(i+3, len(want))], "\n"))
		}
	}
}
