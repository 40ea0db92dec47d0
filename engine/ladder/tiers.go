package ladder

import (
	"strings"

	"escapement/engine/event"
)

// The tiers' heights are ours: what happens in the AV node and in the
// His-Purkinje system needs the most room.
var (
	fullTiers = []Tier{
		{Name: "sinus", Label: "Sinus", Short: "S", Y0: 0, Y1: 0.75},
		{Name: "atria", Label: "Atria", Short: "A", Y0: 0.75, Y1: 1.65},
		{Name: "av_node", Label: "AV node", Short: "N", Y0: 1.65, Y1: 3.15},
		{Name: "his_purkinje", Label: "His-Purkinje", Short: "HP", Y0: 3.15, Y1: 4.4},
		{Name: "ventricles", Label: "Ventricles", Short: "V", Y0: 4.4, Y1: 5.4},
	}
	plainTiers = []Tier{
		{Name: "a", Label: "A", Short: "A", Y0: 0, Y1: 0.9},
		{Name: "av", Label: "AV", Short: "AV", Y0: 0.9, Y1: 2.6},
		{Name: "v", Label: "V", Short: "V", Y0: 2.6, Y1: 3.5},
	}
)

// place is where a site stands: how far down its tier, from 0 to 1.
type place struct {
	tier int
	part float64
}

// fullPlaces and plainPlaces give sites their places by name, others by tissue.
// The His bundle lies just inside its tier, so that a bundle blocked at its
// entrance is seen to be blocked below the His bundle.
var (
	fullPlaces = map[string]place{
		"sinus": {0, 0.35}, "right_atrium": {1, 0}, "left_atrium": {1, 0.5}, "atrial_septum": {1, 1},
		"av_junction": {2, 0.72}, "his": {3, 0.16}, "left_bundle": {3, 0.45},
		"right_bundle": {3, 0.72}, "left_anterior": {3, 0.72}, "left_posterior": {3, 0.72}, "left_septal": {3, 0.72},
	}
	plainPlaces = map[string]place{
		"sinus": {0, 0}, "right_atrium": {0, 0}, "left_atrium": {0, 0.5}, "atrial_septum": {0, 1},
		"av_junction": {1, 0.45}, "his": {1, 0.6}, "left_bundle": {1, 0.74},
		"right_bundle": {1, 0.87}, "left_anterior": {1, 0.87}, "left_posterior": {1, 0.87}, "left_septal": {1, 0.87},
	}
	fullTissue  = [...]place{event.Sinus: {0, 0.35}, event.Atrium: {1, 0.5}, event.Node: {2, 0.72}, event.His: {3, 0.16}, event.Purkinje: {3, 0.72}, event.Ventricle: {4, 0}, event.Accessory: {2, 0.5}}
	plainTissue = [...]place{event.Sinus: {0, 0}, event.Atrium: {0, 0.5}, event.Node: {1, 0.45}, event.His: {1, 0.6}, event.Purkinje: {1, 0.87}, event.Ventricle: {2, 0}, event.Accessory: {1, 0.5}}
)

// layout holds the fixed heights of one form.
type layout struct {
	tiers       []Tier
	y           []float64 // by site
	branch      []Branch  // by site
	vTop, vFoot float64
	aTop, aFoot float64
}

func newLayout(l *event.Log, f Form) *layout {
	tiers, names, tissues := fullTiers, fullPlaces, fullTissue[:]
	if f == Plain {
		tiers, names, tissues = plainTiers, plainPlaces, plainTissue[:]
	}
	lay := &layout{tiers: tiers, y: make([]float64, len(l.Sites)), branch: make([]Branch, len(l.Sites))}
	at := func(p place) float64 {
		t := &tiers[p.tier]
		return t.Y0 + p.part*(t.Y1-t.Y0)
	}
	for i := range l.Sites {
		s := &l.Sites[i]
		p, ok := names[s.Name]
		if !ok && int(s.Tissue) < len(tissues) {
			p = tissues[s.Tissue]
		}
		lay.y[i] = at(p)
		if s.Tissue == event.Purkinje {
			lay.branch[i] = Left
			if strings.HasPrefix(s.Name, "right") {
				lay.branch[i] = Right
			}
		}
	}
	a, v := &tiers[tissues[event.Atrium].tier], &tiers[tissues[event.Ventricle].tier]
	lay.aTop, lay.aFoot, lay.vTop, lay.vFoot = a.Y0, a.Y1, v.Y0, v.Y1
	return lay
}

// side is the branch of a path: of whichever of its ends lies in a branch.
func (lay *layout) side(p *event.Path) Branch {
	switch {
	case p.Name == "av_slow":
		return Slow
	case lay.branch[p.From] != Trunk:
		return lay.branch[p.From]
	}
	return lay.branch[p.To]
}
