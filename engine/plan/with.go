package plan

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// With is a copy of the plan with another number at a path, with the places in lists
// filled in: "interventions[0].extras_ms[1]". The error, a [Diagnoses], names the path,
// the number and what is allowed.
func (p *Plan) With(path string, v float64) (*Plan, error) {
	q := p.Clone()
	list, rest, inItem := strings.Cut(path, "[")
	if !inItem {
		return q, q.State(path, strconv.FormatFloat(v, 'f', -1, 64))
	}
	f, ok := FieldAt(path)
	unknown := Diagnoses{{Path: path, Found: "a field that is not known"}}
	var place int
	var name string
	if n, _ := fmt.Sscanf(rest, "%d].%s", &place, &name); n != 2 || !ok {
		return nil, unknown
	}
	items := q.Interventions
	if list == "heart.foci" {
		items = q.Foci
	}
	if place >= len(items) {
		return nil, unknown
	}
	if f.Kind == Number && (v < f.Min || v > f.Max) {
		return nil, Diagnoses{{Path: path, Found: plainNumber(v), Allowed: fmt.Sprintf("%s to %s", plainNumber(f.Min), plainNumber(f.Max))}}
	}
	if stem, member, inList := strings.Cut(name, "["); inList {
		k, err := strconv.Atoi(strings.TrimSuffix(member, "]"))
		numbers := slices.Clone(items[place][stem].List)
		if err != nil || k < 0 || k >= len(numbers) {
			return nil, unknown
		}
		numbers[k] = v
		items[place][stem] = Value{List: numbers}
		return q, nil
	}
	items[place][name] = Value{Number: v}
	return q, nil
}
