package plan

import "escapement/engine/heart"

// Kind says what a field holds.
type Kind string

const (
	Number   Kind = "number"
	Switch   Kind = "switch"  // true or false
	Choice   Kind = "choice"  // one of Choices
	Pattern  Kind = "pattern" // a drop pattern: "3:2" conducts 2 of 3; "3:2+1" starts after the first; "10%" drops at random
	List     Kind = "list"    // numbers
	ModeCode Kind = "mode"    // a pacing mode of the NBG code
	Any      Kind = "any"     // a number, a text or null, judged with the field it is for
	Group    Kind = "group"   // an object; listed only where it may be null
)

// Field describes one value of the plan file: the single place where its range,
// default and meaning stand. The page, the decoder and the errors use it.
type Field struct {
	Path     string   `json:"path"` // "heart.sinus.rate_bpm"; "[]" stands for an item of a list
	Label    string   `json:"label"`
	Unit     string   `json:"unit,omitempty"`
	Kind     Kind     `json:"kind"`
	Min      float64  `json:"min"`
	Max      float64  `json:"max"`
	Default  *float64 `json:"default"`         // nil: absent, see Help
	Word     string   `json:"word,omitempty"`  // default of a Choice or ModeCode
	On       bool     `json:"on,omitempty"`    // default of a Switch
	Whole    bool     `json:"whole,omitempty"` // whole numbers only
	Nullable bool     `json:"nullable,omitempty"`
	Null     string   `json:"null,omitempty"`    // what null means, for people
	IsNull   bool     `json:"is_null,omitempty"` // null is the default
	Choices  []string `json:"choices,omitempty"`
	Normal   *Range   `json:"normal,omitempty"`
	Source   string   `json:"source,omitempty"` // of the normal range
	Help     string   `json:"help,omitempty"`
	Curve    bool     `json:"curve,omitempty"`    // belongs to a curve given outright
	Advanced bool     `json:"advanced,omitempty"` // the page may fold it away
}

// Range is a closed interval in the unit of its field.
type Range struct {
	Low  float64 `json:"low"`
	High float64 `json:"high"`
}

const (
	common = "common practice"
	alboni = "Alboni et al., Eur Heart J 1985;6:602-608"
	denes  = "Denes et al., Circulation 1974;49:32-41"
)

func num(path, label, unit string, def, lo, hi float64) *Field {
	return &Field{Path: path, Label: label, Unit: unit, Kind: Number, Min: lo, Max: hi, Default: &def}
}

// opt is a number that may be left out.
func opt(path, label, unit string, lo, hi float64, help string) *Field {
	return &Field{Path: path, Label: label, Unit: unit, Kind: Number, Min: lo, Max: hi, Help: help}
}

func (f *Field) normal(lo, hi float64, source string) *Field {
	f.Normal, f.Source = &Range{lo, hi}, source
	return f
}

func (f *Field) help(text string) *Field { f.Help = text; return f }

func (f *Field) null(means string) *Field { f.Nullable, f.Null = true, means; return f }

func (f *Field) whole() *Field { f.Whole = true; return f }

func (f *Field) advanced() *Field { f.Advanced = true; return f }

func pattern(path, label string) *Field {
	f := &Field{Path: path, Label: label, Kind: Pattern, Help: `For block whose cause is not modelled: "3:2" conducts two of every three, "3:2+1" begins after the first, "10%" drops at random.`}
	return f.advanced()
}

// curve are the fields of a recovery curve given outright.
func curve(at string, min, alpha, tau, theta *float64) []*Field {
	f := []*Field{
		opt(at+".min_ms", "shortest delay", "ms", 1, 2000, "Delay after full recovery."),
		opt(at+".alpha_ms", "decrement", "ms", 0, 10000, "How much longer the delay would be without recovery; 0 is all-or-none."),
		opt(at+".tau_ms", "recovery time constant", "ms", 1, 2000, "How fast the decrement fades with recovery."),
		opt(at+".theta_ms", "shortest recovery", "ms", 0, 5000, "Blocked when less time than this has passed since an impulse last left the path."),
	}
	for i, d := range []*float64{min, alpha, tau, theta} {
		f[i].Default, f[i].Curve, f[i].Advanced = d, true, true
	}
	return f
}

func ptr(v float64) *float64 { return &v }

func fields() []*Field {
	fs := []*Field{
		num("span_ms", "length of the strip", "ms", 12000, 100, 86400000).help("Up to 24 hours."),
		num("seed", "random seed", "", 1, 0, 1<<53).help("The same seed gives the same strip.").advanced().whole(),
	}
	fs = append(fs, sinusFields()...)
	fs = append(fs, nodeFields()...)
	fs = append(fs, purkinjeFields()...)
	fs = append(fs, deviceFields()...)
	fs = append(fs, itemFields()...)
	return fs
}

func sinusFields() []*Field {
	const at = "heart.sinus"
	fs := []*Field{
		num(at+".rate_bpm", "sinus rate", "/min", 75, 10, 220).normal(60, 100, common).help("Rate of the sinus node itself; the atria follow it through the exit path."),
		num(at+".jitter_ms", "cycle variation", "ms", 0, 0, 400).help("Each sinus cycle varies by up to this, both ways.").advanced(),
		num(at+".first_ms", "first discharge", "ms", 300, 1, 60000).help("When the sinus node first discharges on this strip.").advanced(),
		num(at+".overdrive", "overdrive suppression", "", 0, 0, 1).help("How much each early beat slows the node afterwards; 0 is none.").advanced(),
		num(at+".overdrive_tau_s", "suppression fades over", "s", 10, 0.1, 600).advanced(),
	}
	exit := curve(at+".exit", ptr(60), ptr(0), ptr(100), ptr(300))
	exit[0].Label, exit[0].Help, exit[0].Advanced = "sinoatrial conduction", "One way, from the sinus node to the atrium.", false
	exit[0].normal(40, 125, "Josephson's range for one way, from memory")
	fs = append(fs, exit...)
	fs = append(fs, num(at+".exit.theta_per_cycle", "shortest recovery by cycle", "ms/ms", 0, -2, 2).advanced(), num(at+".exit.concealed_from", "concealed from", "of theta", 1, 0, 1).advanced(),
		&Field{Path: at + ".exit.up", Label: "into the sinus node", Kind: Group, Nullable: true, Null: "the sinus node is protected", Help: "Conduction from the atrium back into the sinus node. Left out: as outwards.", Advanced: true})
	fs = append(fs, curve(at+".exit.up", nil, nil, nil, nil)...)
	fs = append(fs, pattern(at+".exit.drop", "dropped exits"),
		num("heart.atria.erp_ms", "atrial ERP", "ms", 220, 20, 600).normal(160, 260, alboni).help("Effective refractory period of the atria at a drive of 600 ms."),
		num("heart.atria.erp_per_cycle", "atrial ERP by cycle", "ms/ms", heart.SlopeAtrium, -1, 1).help("Slope: "+denes).advanced())
	return append(fs, rhythmFields()...)
}

func nodeFields() []*Field {
	const n = "heart.av_node"
	const f = n + ".fast"
	fs := []*Field{
		num(f+".ah_ms", "AH", "ms", 80, 2, 1500).normal(55, 125, alboni+" (55-110); Josephson to 125, from memory").null("no conduction to the ventricles").help("Low atrial septum to His bundle, measured at the cycle below."),
		num(f+".erp_ms", "AV node ERP", "ms", 270, 20, 1500).normal(230, 425, alboni+" (230-310); Josephson to 425, from memory").help("Longest coupling of an atrial extrastimulus that does not reach the His bundle."),
		num(f+".wenckebach_cl_ms", "Wenckebach cycle length", "ms", 340, 100, 3000).normal(300, 500, alboni+" (300-400); to 500 from memory").help("1:1 conduction ends when the atrial cycle is shorter."),
		opt(f+".frp_ms", "AV node FRP", "ms", 50, 3000, "Shortest interval between two impulses that reach the His bundle. Left out: the time constant of recovery is 120 ms.").normal(330, 525, alboni+" (330-450); Josephson to 525, from memory").advanced(),
		num(f+".va_ms", "VA", "ms", 210, 20, 1500).normal(110, 325, "258 ± 65 ms in 250 implants for AV block, 2013 series; lower end from memory").null("no conduction back to the atria").help("First ventricular activation to right atrium, pacing the right ventricular apex at 600 ms."),
		opt(f+".va_wenckebach_cl_ms", "VA Wenckebach cycle length", "ms", 100, 599, "1:1 conduction to the atria ends below it. Left out: the same recovery as downwards.").advanced(),
		num(f+".concealed_from", "concealed from", "of theta", 0.7, 0, 1).help("A blocked impulse that comes after this share of the needed recovery still enters the node and leaves it refractory. For a curve given outright the default is 1, none.").advanced(),
		num(f+".concealed_up", "depth from below", "", 0.5, 0, 1).help("Where nothing is conducted to the atria: how deep an impulse from below enters the node.").advanced(),
		num(f+".concealed_down", "depth from above", "", 0.5, 0, 1).help("Where nothing is conducted to the ventricles: how deep an impulse from above enters the node. It then keeps the beat that a device paces for it from being conducted back.").advanced(),
		pattern(f+".drop", "dropped beats"),
		num(n+".ah_at_cycle_ms", "AH measured at cycle", "ms", 800, 300, 3000).advanced(),
		num(n+".erp_at_cycle_ms", "ERP measured at drive", "ms", 600, 300, 3000).advanced(),
	}
	fs = append(fs, curve(f, nil, nil, nil, nil)...)
	fs = append(fs, opt(f+".theta_per_cycle", "shortest recovery by cycle", "ms/ms", -2, 2, "With a curve given outright.").advanced(),
		&Field{Path: f + ".up", Label: "upwards", Kind: Group, Nullable: true, Null: "no conduction back to the atria", Help: "With a curve given outright. Left out: as downwards.", Advanced: true})
	fs = append(fs, curve(f+".up", nil, nil, nil, nil)...)
	fs = append(fs, &Field{Path: n + ".slow", Label: "AV node, slow pathway", Kind: Group, Nullable: true, IsNull: true, Null: "one pathway only", Help: "A second pathway beside the fast one.", Advanced: true})
	slow := curve(n+".slow", ptr(200), ptr(150), ptr(150), ptr(150))
	fs = append(fs, slow...)
	fs = append(fs, num(n+".slow.theta_per_cycle", "shortest recovery by cycle", "ms/ms", 0, -2, 2).advanced(), num(n+".slow.concealed_from", "concealed from", "of theta", 1, 0, 1).advanced(),
		&Field{Path: n + ".slow.up", Label: "upwards", Kind: Group, Nullable: true, Null: "no conduction back to the atria", Help: "Left out: as downwards.", Advanced: true})
	fs = append(fs, curve(n+".slow.up", nil, nil, nil, nil)...)
	low := curve(n+".lower", ptr(10), ptr(0), ptr(100), ptr(150))
	low[0].Label = "junction to His bundle"
	low[0].Help = "A part of AH."
	fs = append(fs, low...)
	return append(fs, num(n+".lower.theta_per_cycle", "shortest recovery by cycle", "ms/ms", 0, -2, 2).advanced(), num(n+".lower.concealed_from", "concealed from", "of theta", 1, 0, 1).advanced(), pattern(n+".lower.drop", "dropped beats"))
}

func purkinjeFields() []*Field {
	const p = "heart.his_purkinje"
	fs := []*Field{num(p+".hv_ms", "HV", "ms", 45, 32, 400).normal(35, 55, "Josephson, from memory; "+alboni+" found 35-45").help("His bundle to the first ventricular activation.")}
	for _, b := range []struct {
		name, label string
		erp, slope  *float64
	}{
		{"right_bundle", "right bundle branch", ptr(340), ptr(heart.SlopeBundle)},
		{"left_bundle", "left bundle branch", ptr(310), ptr(0.12)},
		{"left_anterior", "left anterior fascicle", nil, ptr(0)},
		{"left_posterior", "left posterior fascicle", nil, ptr(0)},
		{"left_septal", "left septal fascicle", nil, ptr(0)},
	} {
		at := p + "." + b.name
		erp := opt(at+".erp_ms", "ERP", "ms", 50, 5000, "Longest His-His coupling that does not pass, at a drive of 600 ms. Left out: shorter than any other part.")
		erp.Default = b.erp
		slope := num(at+".erp_per_cycle", "ERP by cycle", "ms/ms", *b.slope, -1, 2).advanced()
		if b.erp != nil {
			erp.normal(300, 476, "Wu, Denes, Dhingra, Fed Proc 1973;32:1177 (right bundle, 339 to 476 by cycle); lower end from memory")
			slope.help("Slope of the bundle branches: " + denes + "; a smaller one for the left is our choice, so that the right is the longer at long cycles.")
		}
		fs = append(fs, &Field{Path: at, Label: b.label, Kind: Group, Nullable: true, Null: "blocked both ways"},
			erp, num(at+".delay_ms", "added delay", "ms", 0, 0, 300).help("Slow conduction: incomplete block."), slope, pattern(at+".drop", "dropped beats"))
	}
	return append(fs, num("heart.ventricles.erp_ms", "ventricular ERP", "ms", 230, 50, 600).normal(170, 290, "Josephson, from memory"),
		num("heart.ventricles.erp_per_cycle", "ventricular ERP by cycle", "ms/ms", heart.SlopeVentricle, -1, 1).help("Slope of the action potential: Franz et al., JCI 1988;82:972.").advanced())
}
