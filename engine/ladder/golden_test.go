package ladder

import (
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"escapement/engine/event"
)

var update = flag.Bool("update", false, "rewrite the goldens")

// read loads a hand-written log of testdata and sees that it is valid.
func read(t *testing.T, file string) *event.Log {
	t.Helper()
	f, err := os.Open(file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	l, err := event.Parse(f)
	if err != nil {
		t.Fatalf("%s: %v", file, err)
	}
	for _, e := range event.Validate(l) {
		t.Errorf("%s: %v", file, e)
	}
	return l
}

// Every log of testdata has a golden: the diagram in both forms.
func TestGoldens(t *testing.T) {
	logs, err := filepath.Glob("testdata/*.log")
	if err != nil || len(logs) == 0 {
		t.Fatalf("no logs: %v", err)
	}
	for _, file := range logs {
		l := read(t, file)
		got := "# full\n" + Build(l, Options{Form: Full}).Text() + "# plain\n" + Build(l, Options{Form: Plain}).Text()
		golden := strings.TrimSuffix(file, ".log") + ".golden"
		if *update {
			if err := os.WriteFile(golden, []byte(got), 0o644); err != nil {
				t.Fatal(err)
			}
			continue
		}
		want, err := os.ReadFile(golden)
		if err != nil {
			t.Fatal(err)
		}
		if got != string(want) {
			t.Errorf("%s: got\n%s\nwant\n%s", golden, got, want)
		}
	}
}

func TestNoOrphanGoldens(t *testing.T) {
	goldens, _ := filepath.Glob("testdata/*.golden")
	for _, g := range goldens {
		if _, err := os.Stat(strings.TrimSuffix(g, ".golden") + ".log"); err != nil {
			t.Errorf("%s has no log", g)
		}
	}
}
