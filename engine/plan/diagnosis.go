package plan

import (
	"errors"
	"fmt"
	"strings"
)

// Diagnosis is one thing wrong with a plan: the place, what was found, what is
// allowed, and what would mend it.
type Diagnosis struct {
	Path    string `json:"path"`
	Found   string `json:"found"`
	Allowed string `json:"allowed,omitempty"`
	Note    string `json:"note,omitempty"`
}

func (d Diagnosis) String() string {
	var b strings.Builder
	if d.Path != "" {
		b.WriteString(d.Path + ": ")
	}
	b.WriteString(d.Found)
	if d.Allowed != "" {
		b.WriteString("; allowed: " + d.Allowed)
	}
	if d.Note != "" {
		b.WriteString("\n  note: " + d.Note)
	}
	return b.String()
}

// Diagnoses is everything wrong with a plan, in the order of the file's paths.
type Diagnoses []Diagnosis

func (ds Diagnoses) Error() string {
	lines := make([]string, len(ds))
	for i, d := range ds {
		lines[i] = d.String()
	}
	return strings.Join(lines, "\n")
}

// Worded is a diagnosis with its one wording, as programs outside Go get it.
type Worded struct {
	Diagnosis
	Text string `json:"text"`
}

// Told puts any refusal in the form of diagnoses.
func Told(err error) []Worded {
	var found Diagnoses
	if !errors.As(err, &found) {
		return []Worded{{Text: err.Error()}}
	}
	out := make([]Worded, len(found))
	for i, d := range found {
		out[i] = Worded{d, d.String()}
	}
	return out
}

// most bounds the list; a hostile plan could be wrong in a million places.
const most = 50

func (ds *Diagnoses) add(path, found, allowed, note string) {
	switch {
	case len(*ds) < most:
		*ds = append(*ds, Diagnosis{path, clip(found), allowed, note})
	case len(*ds) == most:
		*ds = append(*ds, Diagnosis{Found: fmt.Sprintf("and more than %d others", most)})
	}
}

// clip keeps what was found readable.
func clip(s string) string {
	const limit = 160
	if r := []rune(s); len(r) > limit {
		return string(r[:limit]) + "..."
	}
	return s
}

func (ds Diagnoses) err() error {
	if len(ds) == 0 {
		return nil
	}
	return ds
}

// meant is the name nearest to s, or "" where none is near.
func meant(s string, names []string) string {
	best, at := "", 3
	if len(s) > 40 {
		return ""
	}
	for _, n := range names {
		if d := distance(s, n); d < at {
			best, at = n, d
		}
	}
	if best == "" {
		return ""
	}
	return fmt.Sprintf("did you mean %q?", best)
}

// distance is the number of single letters to insert, delete or change.
func distance(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		last := i
		row[0] = i + 1
		for j := range len(b) {
			cost := last
			if a[i] != b[j] {
				cost++
			}
			last = row[j+1]
			row[j+1] = min(cost, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}
