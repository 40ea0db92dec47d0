package scene

import (
	"bytes"
	"flag"
	"os"
	"testing"

	"escapement/engine/ladder"
)

var update = flag.Bool("update", false, "rewrite the golden")

// One small sheet in its wire form, a mark a line.
func TestGolden(t *testing.T) {
	l := logs(t)["node_block.log"]
	s := Strip(Input{Log: l, Diagram: ladder.Build(l, ladder.Options{Form: ladder.Plain})},
		Options{Title: "Blocked P", Caution: true, Selected: 31})
	meta, _ := Encode(s)
	got := bytes.ReplaceAll(meta, []byte("],["), []byte("],\n["))
	const golden = "testdata/node_block.golden"
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
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}
