package plan

import (
	"fmt"
	"slices"
	"strings"
)

// together judges what single fields cannot: numbers that exclude each other and
// items that lack something.
func (d *decoder) together() {
	const fast = "heart.av_node.fast"
	if d.p.byCurve(fast) {
		for _, f := range catalogue {
			if name, ok := strings.CutPrefix(f.Path, fast+"."); ok && slices.Contains(clinical, name) && d.p.given(f.Path) {
				d.ds.add(f.Path, "a clinical number beside a curve given outright", "one or the other", "take out "+f.Path+", or min_ms, alpha_ms, tau_ms and theta_ms")
			}
		}
		d.whole(fast)
	} else if d.p.given(fast + ".theta_per_cycle") {
		d.ds.add(fast+".theta_per_cycle", "a slope without a curve", "with min_ms, alpha_ms, tau_ms and theta_ms", "")
	} else if d.p.given(fast+".up") || d.p.anyGivenUnder(fast+".up") {
		d.ds.add(fast+".up", "a curve upwards without one downwards", "with min_ms, alpha_ms, tau_ms and theta_ms", "")
	}
	for _, at := range []string{fast + ".up", "heart.av_node.slow.up", "heart.sinus.exit.up"} {
		if d.p.anyGivenUnder(at) {
			d.whole(at)
		}
	}
	d.activity()
	for i, it := range d.p.Foci {
		at := fmt.Sprintf("heart.foci[%d]", i)
		d.has(at, it, "site")
		if it["site"].Text == "sinus" {
			d.ds.add(at+".site", `"sinus"`, "any other site", "the sinus node is a focus already: see heart.sinus")
		}
	}
	for i, it := range d.p.Pathways {
		at := fmt.Sprintf("%s[%d]", pathways, i)
		d.has(at, it, "atrium")
		d.has(at, it, "ventricle")
	}
	total := 0
	for i, it := range d.p.Interventions {
		d.intervention(fmt.Sprintf("interventions[%d]", i), it)
		total += 1 + int(it["count"].Number)
	}
	if total > MaxStimuli {
		d.ds.add("interventions", fmt.Sprintf("%d stimuli in all", total), fmt.Sprintf("up to %d", MaxStimuli), "")
	}
}

// activity asks for as many levels as times, the times ascending.
func (d *decoder) activity() {
	const at = device + ".sensor.activity_at_ms"
	times, levels := d.p.values[at].List, d.p.values[device+".sensor.activity_level"].List
	if len(times) != len(levels) {
		d.ds.add(at, fmt.Sprintf("%d times for %d levels", len(times), len(levels)), "one time for each level", "")
	}
	if !slices.IsSorted(times) {
		d.ds.add(at, show(times), "times that ascend", "")
	}
}

var clinical = []string{"ah_ms", "erp_ms", "wenckebach_cl_ms", "frp_ms", "va_ms", "va_wenckebach_cl_ms"}

var curveParts = []string{"min_ms", "alpha_ms", "tau_ms", "theta_ms"}

// byCurve tells whether a pathway of the AV node is given by its curve.
func (p *Plan) byCurve(at string) bool {
	for _, name := range curveParts {
		if p.given(at + "." + name) {
			return true
		}
	}
	return false
}

// whole asks for the four numbers of a curve that has no defaults.
func (d *decoder) whole(at string) {
	for _, name := range curveParts {
		if !d.p.given(at + "." + name) {
			d.ds.add(at+"."+name, "nothing", "a number: a curve has min_ms, alpha_ms, tau_ms and theta_ms", "")
		}
	}
}

func (d *decoder) has(at string, it Item, name string) bool {
	if _, ok := it[name]; ok {
		return true
	}
	d.ds.add(at+"."+name, "nothing", byPath[listOf(at)+"[]."+name].allowed(), "")
	return false
}

func listOf(at string) string { return at[:strings.IndexByte(at, '[')] }

func (d *decoder) intervention(at string, it Item) {
	if !d.has(at, it, "at_ms") || !d.has(at, it, "do") {
		return
	}
	do := it["do"].Text
	n := needs[do]
	for _, name := range n.must {
		if !d.has(at, it, name) {
			return
		}
	}
	for _, name := range itemNames(it) {
		if name != "at_ms" && name != "do" && !slices.Contains(n.must, name) && !slices.Contains(n.may, name) {
			d.ds.add(at+"."+name, "a field that "+do+" does not take", strings.Join(append(append([]string{"at_ms"}, n.must...), n.may...), ", "), "")
		}
	}
	switch {
	case do == "set":
		d.set(at, it)
	case do == "signal" && it["count"].Number > 1:
		d.has(at, it, "cycle_ms")
	}
}

func itemNames(it Item) []string {
	var names []string
	for _, f := range catalogue {
		if name, ok := strings.CutPrefix(f.Path, "interventions[]."); ok {
			if _, has := it[name]; has {
				names = append(names, name)
			}
		}
	}
	return names
}

// set judges the field that an intervention changes and the value it sets.
func (d *decoder) set(at string, it Item) {
	field, item := itemPath(it["field"].Text)
	f := byPath[field]
	ofDevice := strings.HasPrefix(field, device+".") && f != nil && f.Kind == Number
	if f == nil || !ofDevice && (!strings.HasPrefix(field, "heart.") || f.Kind != Number && f.Kind != Pattern && !(f.Kind == Group && !f.IsNull)) {
		d.ds.add(at+".field", show(it["field"].Text), "the path of a number in heart or pacemaker, such as heart.sinus.rate_bpm", meant(it["field"].Text, settable()))
		return
	}
	if ofDevice && d.p.null(device) {
		d.ds.add(at+".field", show(it["field"].Text), "a number of the heart: this plan has no pacemaker", "")
		return
	}
	if ofDevice && it.number("interventions", "over_ms") > 0 {
		d.ds.add(at+".over_ms", "a gradual change of a device", "a change at once", "take over_ms out")
		return
	}
	if list, what := d.p.list(field); item >= len(list) || item < 0 && strings.Contains(field, "[]") {
		d.ds.add(at+".field", show(it["field"].Text), fmt.Sprintf("one of the %d %s of this plan", len(list), what), "")
		return
	}
	to := it["to"]
	if f.Kind == Group {
		if !to.Null && to.Text != "default" {
			d.ds.add(at+".to", show(to.raw()), `null, or "default" to let it conduct again`, "")
		}
		return
	}
	value, allowed := judge(f, to.raw())
	if allowed != "" {
		d.ds.add(at+".to", show(to.raw()), allowed, "")
		return
	}
	if it.number("interventions", "over_ms") > 0 && (value.Null || f.Kind != Number || d.p.null(f.Path) || item >= 0 && d.p.item(field, item)[leafOf(field)].Null) {
		d.ds.add(at+".over_ms", "a gradual change from or to null or of a pattern", "a change at once", "take over_ms out")
	}
	it["to"] = value
}

// raw is the value as JSON would give it.
func (v Value) raw() any {
	switch {
	case v.Null:
		return nil
	case v.Text != "":
		return v.Text
	}
	return v.Number
}

func settable() []string {
	var names []string
	for _, f := range catalogue {
		if f.Kind == Number && (strings.HasPrefix(f.Path, "heart.") || strings.HasPrefix(f.Path, device+".")) {
			names = append(names, f.Path)
		}
	}
	return names
}

// itemPath turns "heart.foci[2].rate_bpm" into the path of its field and the index
// of the item; -1 where there is none.
func itemPath(path string) (field string, item int) {
	open, shut := strings.IndexByte(path, '['), strings.IndexByte(path, ']')
	if open < 0 || shut < open+2 || shut-open > 4 {
		return path, -1 // of a list, that is no item
	}
	n := 0
	for _, c := range path[open+1 : shut] {
		if c < '0' || c > '9' {
			return path, -1
		}
		n = n*10 + int(c-'0')
	}
	return path[:open] + "[]" + path[shut+1:], n
}
