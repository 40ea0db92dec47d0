package report

import (
	"strconv"
	"strings"

	"escapement/engine/contrast"
	"escapement/engine/plan"
	"escapement/engine/scene"
	"escapement/engine/timeline"
)

// Differences are the lines for [Compare]: numbers of both cases, and the findings,
// warnings and settings in which they differ. Numbers that agree are left out.
func Differences(before, after *timeline.Timeline) []scene.Difference {
	out := []scene.Difference{}
	for _, r := range contrast.Of(before.Side(), after.Side()).Rows {
		if r.Sign == contrast.Same {
			continue
		}
		name := named(r.Place, r.Name)
		out = append(out, scene.Difference{Group: r.Part, Label: name, Before: r.Before, After: r.After, Change: r.By})
	}
	return out
}

// named is the name of a setting together with the part that it belongs to, or the
// given name of anything else.
func named(place, name string) string {
	list, rest, of := strings.Cut(place, "[")
	if n, _, ok := strings.Cut(rest, "]."); of && ok {
		if i, err := strconv.Atoi(n); err == nil {
			return strings.TrimSuffix(strings.TrimPrefix(list, "heart."), "s") + " " + strconv.Itoa(i+1) + ", " + name
		}
	}
	for _, f := range plan.Catalogue() {
		if f.Path == place {
			return label(&f)
		}
	}
	return name
}
