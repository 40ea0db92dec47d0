package sweep

import (
	"testing"

	"escapement/engine/plan"
	"escapement/presets"
)

// Every preset with a sweep runs: no point is refused, and each word outcome comes up
// in more than one way, or the map shows nothing.
func TestThePresetsWithASweepRun(t *testing.T) {
	n := 0
	for _, name := range presets.Names() {
		file, _ := presets.Read(name)
		p, err := plan.Decode(file)
		if err != nil {
			t.Fatal(err)
		}
		if p.Sweep == nil {
			continue
		}
		n++
		g, err := New(p)
		if err != nil {
			t.Fatal(err)
		}
		points := g.Part(1, 7)
		table := NewTable(g)
		if _, err := g.Run(t.Context(), Settings{Points: points, Each: table.Put}); err != nil {
			t.Fatal(err)
		}
		seen := make([]map[string]bool, len(g.Outcomes())) // counted only
		for k := range seen {
			seen[k] = map[string]bool{}
		}
		for _, i := range points {
			c := table.Cell(i)
			if c.Refused != "" {
				t.Fatalf("%s: point %d is refused: %s", name, i, c.Refused)
			}
			for k, o := range g.Outcomes() {
				if o.Kind == plan.WordOutcome {
					seen[k][c.Values[k].Word()] = true
				}
			}
		}
		if k := 0; g.Outcomes()[k].Kind == plan.WordOutcome && len(seen[k]) < 2 {
			t.Errorf("%s: %s is the same at every point: %v", name, g.Outcomes()[k].Name, seen[k])
		}
	}
	if n < 5 {
		t.Errorf("%d presets have a sweep", n)
	}
}

// Every outcome of the catalogue is one that a run is reduced to, and no other.
func TestTheOutcomesOfTheCatalogueAreThoseOfARun(t *testing.T) {
	count := 0
	for _, o := range plan.Outcomes() {
		_, isNumber := numbers[o.Name]
		_, isWord := word[o.Name]
		_, isWords := words[o.Name]
		if isNumber != (o.Kind == plan.NumberOutcome) || isWord != (o.Kind == plan.WordOutcome) || isWords != (o.Kind == plan.WordsOutcome) {
			t.Errorf("%s is a %s in the catalogue; here a number: %v, a word: %v, words: %v", o.Name, o.Kind, isNumber, isWord, isWords)
		}
		count++
	}
	if here := len(numbers) + len(word) + len(words); here != count {
		t.Errorf("%d outcomes in the catalogue, %d here", count, here)
	}
}
