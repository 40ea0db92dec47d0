package plan

import (
	"slices"
	"strings"
)

// Amount is the number at a path as it holds, typed or by default; false where the
// part of the heart or device is not there, where nothing says a number, or where a
// curve given outright stands in its place.
func (p *Plan) Amount(path string) (float64, bool) {
	f, ok := FieldAt(path)
	if !ok || f.Kind != Number || p.null(path) {
		return 0, false
	}
	at, name := parent(path), path[strings.LastIndexByte(path, '.')+1:]
	curve := p.byCurve(at)
	if curve && slices.Contains(clinical, name) || !curve && f.Curve && strings.HasPrefix(at, "heart.av_node.") {
		return 0, false
	}
	v, given := p.values[path]
	if !given && f.Default == nil {
		return 0, false
	}
	if !given {
		return *f.Default, true
	}
	return v.Number, true
}

// ConductsDown tells whether impulses of the atria can reach the ventricles at any
// time of the strip, as far as the plan says without running: by the AV node or beside it.
func (p *Plan) ConductsDown() bool { return p.conducts("heart.av_node.fast.ah_ms") }

// ConductsUp tells the same of impulses of the ventricles and the atria.
func (p *Plan) ConductsUp() bool { return p.conducts("heart.av_node.fast.va_ms") }

func (p *Plan) conducts(clinical string) bool {
	if !p.null(clinical) || p.byCurve("heart.av_node.fast") || !p.null("heart.av_node.slow") || len(p.Pathways) > 0 {
		return true
	}
	return len(p.sets("heart.av_node.")) > 0 || len(p.sets(pathways)) > 0
}

// sets are the interventions that set something below a path.
func (p *Plan) sets(prefix string) []Item {
	var out []Item
	for _, it := range p.Interventions {
		if it["do"].Text == "set" && strings.HasPrefix(it["field"].Text, prefix) {
			out = append(out, it)
		}
	}
	return out
}

// Steady tells whether the atria follow a sinus node of one cycle through the whole
// strip, unless a device paces them: nothing is done to the heart, nothing else
// discharges or conducts, no impulse is held up on the way out of the node, and the
// atria have recovered long before the next.
func (p *Plan) Steady() bool {
	const sinus = "heart.sinus."
	if len(p.Interventions) > 0 || len(p.Foci) > 0 || p.ConductsDown() || p.ConductsUp() {
		return false
	}
	for path := range p.values { // any order: it is only asked whether one is there
		if strings.HasPrefix(path, sinus) && !slices.Contains([]string{sinus + "rate_bpm", sinus + "first_ms", sinus + "exit.theta_ms", sinus + "exit.min_ms"}, path) {
			return false
		}
	}
	pp := 60000 / p.number(sinus+"rate_bpm")
	return pp > p.number(sinus+"exit.theta_ms")+1 && pp > p.number("heart.atria.erp_ms")+50 && !p.given("heart.atria.erp_per_cycle")
}
