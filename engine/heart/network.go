package heart

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// sites of every heart, in the order of their numbers.
var sites = []event.Site{
	{Name: "sinus", Label: "sinus node", Tissue: event.Sinus},
	{Name: "right_atrium", Label: "right atrium", Tissue: event.Atrium},
	{Name: "left_atrium", Label: "left atrium", Tissue: event.Atrium},
	{Name: "atrial_septum", Label: "low atrial septum", Tissue: event.Atrium},
	{Name: "av_junction", Label: "AV junction", Tissue: event.Node},
	{Name: "his", Label: "His bundle", Tissue: event.His},
	{Name: "right_bundle", Label: "right bundle branch", Tissue: event.Purkinje},
	{Name: "left_bundle", Label: "left bundle branch", Tissue: event.Purkinje},
	{Name: "left_anterior", Label: "left anterior fascicle", Tissue: event.Purkinje},
	{Name: "left_posterior", Label: "left posterior fascicle", Tissue: event.Purkinje},
	{Name: "left_septal", Label: "left septal fascicle", Tissue: event.Purkinje},
	{Name: "rv_septum", Label: "right ventricular septum", Tissue: event.Ventricle},
	{Name: "rv_apex", Label: "right ventricular apex", Tissue: event.Ventricle},
	{Name: "rv_outflow", Label: "right ventricular outflow tract", Tissue: event.Ventricle},
	{Name: "rv_free_wall", Label: "right ventricular free wall", Tissue: event.Ventricle},
	{Name: "lv_septum", Label: "left ventricular septum", Tissue: event.Ventricle},
	{Name: "lv_apex", Label: "left ventricular apex", Tissue: event.Ventricle},
	{Name: "lv_anterior", Label: "left ventricular anterior wall", Tissue: event.Ventricle},
	{Name: "lv_lateral", Label: "left ventricular lateral wall", Tissue: event.Ventricle},
	{Name: "lv_posterior", Label: "left ventricular posterior wall", Tissue: event.Ventricle},
}

// SiteNames are the names that a plan may use for stimuli and foci.
func SiteNames() []string {
	names := make([]string, len(sites))
	for i := range sites {
		names[i] = sites[i].Name
	}
	return names
}

// SiteLabel is the name for people of a site, or the name itself where there is none.
func SiteLabel(name string) string {
	for i := range sites {
		if sites[i].Name == name {
			return sites[i].Label
		}
	}
	return name
}

// Refractory periods of the tissue between the measured ones: short enough that
// the paths decide, long enough that nothing turns round inside a bundle. From
// memory of usual values; no check rests on them.
const (
	sinusERP      = 150
	junctionERP   = 100
	hisERP        = 210
	purkinjeExtra = 20
	purkinjeGap   = 200 // theta of a fascicle without an ERP of its own
)

// New makes the heart of the numbers. The error, an *Unmet, says which numbers
// cannot hold together.
func New(n *Numbers) (*Heart, error) {
	if err := n.Rhythm.check(n.AtriumERP); err != nil {
		return nil, err
	}
	b := &builder{n: n, h: &Heart{Quantum: max(n.QuantumUS, 1)}}
	b.h.Basic = tick.PerMinute(n.Sinus.Rate.At(0))
	b.sites()
	b.atria()
	b.purkinje()
	b.muscle()
	if err := b.node(); err != nil {
		return nil, err
	}
	if err := b.pathways(); err != nil {
		return nil, err
	}
	for i := range b.h.Paths {
		p := &b.h.Paths[i]
		b.first(&p.Down)
		b.first(&p.Up)
	}
	b.foci()
	return b.h, nil
}

type builder struct {
	n *Numbers
	h *Heart
}

func (b *builder) sites() {
	constant := func(ms float64) Cycled { return Cycled{BaseMS: ms} }
	for _, s := range sites {
		var r Cycled
		switch s.Tissue {
		case event.Sinus:
			r = constant(sinusERP)
		case event.Atrium:
			r = b.n.AtriumERP
			if b.n.Rhythm.Driver == Arrivals {
				r = constant(b.n.Rhythm.LeastMS)
			}
		case event.Node:
			r = constant(junctionERP)
		case event.His:
			r = constant(hisERP)
		case event.Purkinje:
			// Longer than the muscle's, so that a premature impulse stops in the Purkinje
			// system rather than in a part of the muscle.
			r = b.n.VentricERP
			r.BaseMS += purkinjeExtra
		case event.Ventricle:
			r = b.n.VentricERP
		}
		b.h.Sites = append(b.h.Sites, Site{Site: s, Refractory: r})
	}
}

// add appends a path; down and up are its conduction in the two directions.
func (b *builder) add(name, label string, tissue event.Tissue, from, to string, down, up Conduct) *Path {
	f, t := b.h.Site(from), b.h.Site(to)
	if f < 0 || t < 0 {
		panic(fmt.Sprintf("heart: path %s joins %s and %s, one of which is no site", name, from, to))
	}
	b.h.Paths = append(b.h.Paths, Path{Path: event.Path{Name: name, Label: label, Tissue: tissue, From: f, To: t}, Down: down, Up: up})
	p := &b.h.Paths[len(b.h.Paths)-1]
	p.Down.Anew, p.Up.Anew = true, true
	return p
}

// muscle makes a path one through muscle, in which a beat goes on.
func (p *Path) muscle() { p.Silent, p.Down.Anew, p.Up.Anew = true, false, false }

// plain is a conduction time without decrement.
func plain(d tick.Dur, thetaMS float64) Conduct {
	return Conduct{Open: true, Curve: Curve{MinMS: d.MS(), Theta: Cycled{BaseMS: thetaMS}, Inner: 1}}
}

func (d *Direct) conduct() Conduct {
	return Conduct{Open: true, Curve: Curve{MinMS: d.MinMS, AlphaMS: d.AlphaMS, TauMS: d.TauMS, Inner: d.Inner,
		Theta: Cycled{BaseMS: d.ThetaMS, PerCycle: d.ThetaPerCycle, CycleMS: DriveMS, FloorMS: 1}}}
}

// both gives the two directions of a curve given outright.
func (d *Direct) both() (down, up Conduct) {
	down = d.conduct()
	switch {
	case d.NoUp:
		up = down
		up.Open = false
	case d.Up != nil:
		up = d.Up.conduct()
	default:
		up = down
	}
	return down, up
}

func (b *builder) atria() {
	down, up := b.n.Sinus.Exit.both()
	b.add("sinoatrial", "sinoatrial exit path", event.Sinus, "sinus", "right_atrium", down, up).Drop = b.n.Sinus.Exit.Drop
	for _, a := range anatomyAtria {
		w, ok := atrialPaths[[2]string{a.From, a.To}]
		if !ok {
			w, a.From, a.To = atrialPaths[[2]string{a.To, a.From}], a.To, a.From
		}
		c := plain(a.Delay, 0)
		b.add(w.name, w.label, event.Atrium, a.From, a.To, c, c).muscle()
	}
}

var atrialPaths = map[[2]string]struct{ name, label string }{
	{"right_atrium", "atrial_septum"}: {"internodal", "right atrium to septum"},
	{"right_atrium", "left_atrium"}:   {"interatrial", "right to left atrium"},
	{"atrial_septum", "left_atrium"}:  {"septal_left", "septum to left atrium"},
}

// trunks are the bundles and fascicles from the top down.
func (b *builder) trunks() []struct {
	name, from, to string
	delay          tick.Dur
	n              *BundleNumbers
} {
	type trunk = struct {
		name, from, to string
		delay          tick.Dur
		n              *BundleNumbers
	}
	return []trunk{
		{"his_right", "his", "right_bundle", anatomyHisRightBundle, &b.n.Right},
		{"his_left", "his", "left_bundle", anatomyHisLeftBundle, &b.n.Left},
		{"left_bundle-left_anterior", "left_bundle", "left_anterior", anatomyLeftBundleAnterior, &b.n.Anterior},
		{"left_bundle-left_posterior", "left_bundle", "left_posterior", anatomyLeftBundlePosterior, &b.n.Posterior},
		{"left_bundle-left_septal", "left_bundle", "left_septal", anatomyLeftBundleSeptal, &b.n.Septal},
	}
}

// purkinje lays the bundles, the fascicles and their endings in the muscle. The
// way from the His bundle to the first region of muscle takes HV: what is typed
// over the anatomy's own time is added to the two trunks that leave the His
// bundle.
func (b *builder) purkinje() {
	extra := tick.MS(b.n.HVMS) - b.anatomicalHV()
	for _, t := range b.trunks() {
		d := t.delay + tick.MS(t.n.DelayMS)
		if t.from == "his" {
			d += extra
		}
		b.trunk(t.name, t.from, t.to, d, t.n)
	}
	for _, a := range anatomyPurkinje {
		// No theta of its own: an ending that let nothing in while the wave passes
		// would let the muscle re-enter the fascicle long after. Its two ends decide.
		c := plain(a.Delay, 0)
		b.add(a.From+"-"+a.To, SiteLabel(a.From)+" to "+SiteLabel(a.To), event.Purkinje, a.From, a.To, c, c).muscle()
	}
}

// anatomicalHV is the time from the His bundle to the first region of muscle that
// the geometry gives by itself.
func (b *builder) anatomicalHV() tick.Dur {
	at := map[string]tick.Dur{"his": 0}
	for _, t := range b.trunks() {
		at[t.to] = at[t.from] + t.delay
	}
	first := tick.Dur(tick.Never)
	for _, a := range anatomyPurkinje {
		first = min(first, at[a.From]+a.Delay)
	}
	return first
}

func (b *builder) trunk(name, from, to string, d tick.Dur, n *BundleNumbers) {
	c := plain(d, purkinjeGap)
	if n.ERPMS > 0 {
		// The ERP is an interval between impulses at the entrance; the path counts
		// from when the last one left.
		c.Theta = Cycled{BaseMS: max(n.ERPMS-d.MS(), 1), PerCycle: n.ThetaPerCycle, CycleMS: DriveMS, FloorMS: 1}
	}
	c.Open = !n.Closed
	p := b.add(name, SiteLabel(to), event.Purkinje, from, to, c, c)
	p.Drop, p.Down.Anew, p.Up.Anew = n.Drop, false, from == "his"
}

func (b *builder) muscle() {
	for _, a := range anatomyMuscle {
		c := plain(a.Delay, 0)
		b.add(a.From+"-"+a.To, "ventricular muscle", event.Ventricle, a.From, a.To, c, c).muscle()
	}
}

// first sets the recovery that the first impulse of the strip finds: that of a
// steady 1:1 rhythm at the basic cycle, where the path can follow it.
func (b *builder) first(c *Conduct) {
	if c.AlphaMS == 0 {
		return
	}
	if a, ok := c.Steady(b.h.Basic.MS()); ok {
		c.FirstMS = b.h.Basic.MS() - a
	}
}
