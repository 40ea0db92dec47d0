package scene

import (
	"bytes"
	"flag"
	"os"
	"testing"

	"escapement/engine/ladder"
)

var update = flag.Bool("update", false, "rewrite the golden")

// Two small sheets in their wire form, a mark a line.
func TestGolden(t *testing.T) {
	all := logs(t)
	for _, c := range []struct {
		name string
		form ladder.Form
		o    Options
	}{
		{"node_block", ladder.Plain, Options{Title: "Blocked P", Caution: true, Selected: 31}},
		{"device_upper_rate", ladder.Plain, Options{Caution: true, Legend: true, Selected: 35}},
	} {
		l := all[c.name+".log"]
		meta := Describe(Strip(Input{Log: l, Diagram: ladder.Build(l, ladder.Options{Form: c.form})}, c.o))
		sameAsGolden(t, c.name, meta)
	}
	sameAsGolden(t, "lanes", Describe(laned(t, Strip, Options{Lanes: []string{"lead:II", "egm:HISd", "membrane:his", "axis", "device"}, To: 1000000, Grid: true, Caution: true})))
	sameAsGolden(t, "paper_6x2", Describe(laned(t, Paper12, Options{To: 1000000, Paper: Form12{Columns: 2}, Lanes: []string{"axis"}})))
}

func sameAsGolden(t *testing.T, name string, meta []byte) {
	t.Helper()
	got := bytes.ReplaceAll(meta, []byte("],["), []byte("],\n["))
	golden := "testdata/" + name + ".golden"
	if *update {
		if err := os.WriteFile(golden, got, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want) {
		t.Errorf("%s: got\n%s\nwant\n%s", name, got, want)
	}
}
