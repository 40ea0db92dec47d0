package plan

import (
	"strings"

	"escapement/engine/heart"
)

// pathways is where the list of accessory pathways stands.
const pathways = "heart.pathways"

// pathwayFields describe an accessory pathway.
func pathwayFields() []*Field {
	const at = pathways + "[]"
	end := func(name, label string, sites []string, help string) *Field {
		return &Field{Path: at + "." + name, Label: label, Kind: Choice, Choices: sites, Help: help}
	}
	return []*Field{
		end("atrium", "atrial end", heart.AtrialSites(), "Left atrium for a left-sided pathway, low atrial septum for a septal one, right atrium for one in the right free wall."),
		end("ventricle", "ventricular end", heart.VentricularSites(), "Where it enters the ventricles: lateral and posterior left wall, septum, right free wall."),
		num(at+".down_ms", "conduction to the ventricles", "ms", 30, 1, 500).null("does not conduct to the ventricles: concealed").help("From the atrial to the ventricular end. Usual lengths of 20 to 60 ms are from memory; the way from the atrial site to the ring is part of it."),
		num(at+".down_erp_ms", "ERP downwards", "ms", 280, 2, 2000).help("Longest coupling at the atrial end that does not pass. 250 or less is taken for a risk in fibrillation (ESC 2019, from memory).").normal(250, 600, "over 250: ESC 2019, from memory"),
		num(at+".up_ms", "conduction to the atria", "ms", 30, 1, 500).null("does not conduct to the atria").help("From the ventricular to the atrial end."),
		num(at+".up_erp_ms", "ERP upwards", "ms", 260, 2, 2000).help("Longest coupling at the ventricular end that does not pass."),
		num(at+".erp_at_cycle_ms", "ERP measured at drive", "ms", heart.DriveMS, 200, 3000).advanced(),
		num(at+".erp_per_cycle", "ERP by cycle", "ms/ms", heart.SlopeAtrium, -1, 2).help("A strand of ordinary muscle: the slope of the atria, " + denes + ". None of its own could be confirmed.").advanced(),
		num(at+".concealed_from", "concealed from", "of theta", 1, 0, 1).help("A blocked impulse that comes after this share of the needed recovery still enters the pathway and leaves it refractory.").advanced(),
		num(at+".concealed_down", "depth from above", "", 0, 0, 1).help("Where nothing is conducted to the ventricles: how deep an impulse from above enters. It then keeps the next one from below out for a time.").advanced(),
		num(at+".concealed_up", "depth from below", "", 0, 0, 1).help("Where nothing is conducted to the atria: how deep an impulse from below enters.").advanced(),
		pattern(at+".drop", "dropped impulses"),
	}
}

// accessory reads a pathway. A direction that does not conduct keeps its default
// time, of which concealed impulses take their share.
func (it Item) accessory() heart.PathwayNumbers {
	at := func(name string) float64 {
		if it[name].Null {
			return *byPath[pathways+"[]."+name].Default
		}
		return it.number(pathways, name)
	}
	n := heart.PathwayNumbers{Atrium: it["atrium"].Text, Ventricle: it["ventricle"].Text,
		DownMS: at("down_ms"), UpMS: at("up_ms"), NoDown: it["down_ms"].Null, NoUp: it["up_ms"].Null,
		DownERPMS: at("down_erp_ms"), UpERPMS: at("up_erp_ms"), ERPCycleMS: at("erp_at_cycle_ms"), ERPPerCycle: at("erp_per_cycle"),
		Inner: at("concealed_from"), DownReach: at("concealed_down"), UpReach: at("concealed_up")}
	n.Drop, _ = parseDrop(it["drop"].Text)
	return n
}

// list is the list that the field of an item belongs to, and what its items are called.
func (p *Plan) list(field string) (items []Item, what string) {
	switch {
	case strings.HasPrefix(field, pathways):
		return p.Pathways, "accessory pathways"
	case strings.HasPrefix(field, "interventions[]."):
		return p.Interventions, "interventions"
	}
	return p.Foci, "foci"
}

// item is the item of a list by the path of one of its fields.
func (p *Plan) item(field string, i int) Item {
	items, _ := p.list(field)
	return items[i]
}

// leafOf is the last name of a path.
func leafOf(path string) string { return path[strings.LastIndexByte(path, '.')+1:] }
