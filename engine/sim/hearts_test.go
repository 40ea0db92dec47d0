package sim

import (
	"math/rand/v2"
	"strconv"

	"escapement/engine/event"
	"escapement/engine/heart"
	"escapement/engine/plan"
	"escapement/engine/tick"
)

// step is the quantum of most random hearts.
const step = 100 * tick.Microsecond

// dice makes random hearts.
type dice struct{ *rand.Rand }

func (d dice) chance(p float64) bool          { return d.Float64() < p }
func (d dice) between(lo, hi float64) float64 { return lo + (hi-lo)*d.Float64() }
func (d dice) int(lo, hi int) int             { return lo + d.IntN(hi-lo+1) }
func (d dice) at(until tick.Time) tick.Time {
	return tick.Time(d.Int64N(int64(until)/int64(step)+1)) * tick.Time(step)
}
func (d dice) either(p float64, a, b float64) float64 {
	if d.chance(p) {
		return a
	}
	return b
}

// network is a heart of a few sites and paths with no likeness to a real one. Half
// of them are coarse: every length is a multiple of 10 ms, so that many things
// fall on one instant.
func (d dice) network() *plan.Program {
	prog := &plan.Program{Span: 1500 * tick.Time(tick.Millisecond), Seed: d.Uint64()}
	grain := d.either(0.5, 10, 0)
	prog.Heart = d.sites(grain)
	span := prog.Span
	for range d.int(1, 4) {
		prog.Heart.Foci = append(prog.Heart.Foci, d.focus(event.SiteID(d.IntN(len(prog.Heart.Sites))), span, grain))
	}
	prog.Stimuli = d.stimuli(len(prog.Heart.Sites), span, grain)
	if d.chance(0.3) {
		d.driven(prog.Heart, span, grain)
	}
	if d.chance(0.3) {
		h := prog.Heart
		for i := range d.int(1, 3) {
			c := plan.Change{T: d.time(span, grain), Field: d.word("field"), To: strconv.Itoa(i)}
			if d.chance(0.8) {
				h = d.changed(h, grain)
				c.Heart = h
			}
			if i > 0 {
				c.T = max(c.T, prog.Changes[i-1].T)
			}
			prog.Changes = append(prog.Changes, c)
		}
	}
	return prog
}

// driven gives a heart a driver, and a time in which atrial muscle is apart.
func (d dice) driven(h *heart.Heart, span tick.Time, grain float64) {
	f := heart.Focus{Site: event.SiteID(d.IntN(len(h.Sites))), Driver: heart.Driver(d.int(1, 2)), Rate: heart.Constant(60000 / d.ms(30, 400, grain)), From: d.time(span, grain)}
	if d.chance(0.5) {
		f.Until = d.time(span, grain)
	}
	f.Protected = f.Driver == heart.Arrivals
	f.EndsBelow = tick.MS(d.either(0.5, 0, d.ms(1, 200, grain)))
	f.Least = tick.MS(d.ms(1, 150, grain))
	f.Mean = f.Least + tick.MS(d.ms(1, 150, grain))
	h.Foci = append(h.Foci, f)
	if d.chance(0.5) {
		h.Apart.From, h.Apart.Until = d.time(span, grain), d.time(span, grain)
	}
}

func (d dice) word(s string) string {
	if d.chance(0.2) {
		return ""
	}
	return s
}

func (d dice) sites(grain float64) *heart.Heart {
	h := &heart.Heart{Quantum: step, Basic: tick.MS(d.ms(300, 1500, grain))}
	for i := range d.int(3, 8) {
		s := heart.Site{Site: event.Site{Name: "s" + strconv.Itoa(i), Tissue: event.Tissue(d.int(1, 6))}}
		s.Refractory = d.cycled(10, 300, grain)
		h.Sites = append(h.Sites, s)
	}
	n := len(h.Sites)
	for i := range d.int(n-1, n+4) {
		from := d.IntN(n)
		to := (from + d.int(1, n-1)) % n
		p := heart.Path{Path: event.Path{Name: "p" + strconv.Itoa(i), Tissue: event.Tissue(d.int(1, 7)), From: event.SiteID(from), To: event.SiteID(to)}}
		p.Down, p.Up = d.conduct(grain), d.conduct(grain)
		if d.chance(0.3) {
			p.Up = p.Down
		}
		if p.Silent = d.chance(0.2); !p.Silent {
			p.Down.Anew, p.Up.Anew = d.chance(0.5), d.chance(0.5)
		}
		p.Drop = d.drop()
		h.Paths = append(h.Paths, p)
	}
	return h
}

// ms is a length in milliseconds, at least 1 ms and a multiple of the grain if any.
func (d dice) ms(lo, hi, grain float64) float64 {
	v := d.between(lo, hi)
	if grain == 0 {
		return max(v, 1)
	}
	return max(float64(int(v/grain))*grain, grain)
}

func (d dice) time(until tick.Time, grain float64) tick.Time {
	if grain == 0 {
		return d.at(until)
	}
	return tick.Time(tick.MS(d.ms(0, until.MS(), grain)))
}

func (d dice) cycled(lo, hi, grain float64) heart.Cycled {
	c := heart.Cycled{BaseMS: d.ms(lo, hi, grain)}
	if d.chance(0.4) {
		c.PerCycle, c.CycleMS, c.FloorMS = d.between(-0.3, 0.4), 600, d.ms(1, lo, grain)
	}
	return c
}

func (d dice) conduct(grain float64) heart.Conduct {
	c := heart.Conduct{Open: d.chance(0.85), Curve: heart.Curve{MinMS: d.ms(1, 120, grain), Theta: d.cycled(10, 350, grain), Inner: 1}}
	if d.chance(0.1) {
		c.Theta.BaseMS = 0
	}
	if d.chance(0.5) {
		c.AlphaMS, c.TauMS = d.ms(5, 250, grain), d.ms(20, 300, grain)
		if d.chance(0.5) {
			c.FirstMS = d.ms(100, 1000, grain)
		}
	}
	if d.chance(0.6) {
		c.Inner = d.either(0.1, 0, d.between(0.2, 1.2))
		if grain > 0 {
			c.Inner = float64(d.int(0, 4)) / 4
		}
	}
	if d.chance(0.6) {
		c.Reach = uint16(d.int(0, 1000))
	}
	return c
}

func (d dice) drop() heart.Drop {
	switch d.IntN(6) {
	case 0:
		of := d.int(1, 5)
		return heart.Drop{Of: of, Pass: d.int(0, of), Phase: d.IntN(of)}
	case 1:
		return heart.Drop{Chance: d.Float64()}
	}
	return heart.Drop{}
}

func (d dice) focus(site event.SiteID, span tick.Time, grain float64) heart.Focus {
	f := heart.Focus{Site: site, Protected: d.chance(0.3), Rate: d.rate(span, grain)}
	if d.chance(0.5) {
		f.First = tick.MS(d.ms(1, 900, grain))
	}
	if d.chance(0.3) {
		f.Jitter = tick.MS(d.ms(1, d.either(0.2, 1000, 100), grain))
	}
	if d.chance(0.4) {
		f.OverdriveGain, f.OverdriveTau = d.between(0, 1), tick.MS(d.between(100, 10000))
	}
	return f
}

func (d dice) rate(span tick.Time, grain float64) heart.Rate {
	bpm := func() float64 {
		if grain > 0 {
			return 60000 / d.ms(200, 2000, grain)
		}
		return d.between(30, 350)
	}
	r := heart.Constant(bpm())
	for d.chance(0.4) {
		last := r[len(r)-1]
		at := max(last.T, d.time(span, grain))
		if d.chance(0.5) {
			r = append(r, heart.Knot{T: at, BPM: last.BPM}) // a step follows
		}
		r = append(r, heart.Knot{T: at, BPM: bpm()})
	}
	return r
}

func (d dice) stimuli(sites int, span tick.Time, grain float64) []plan.Stimulus {
	var out []plan.Stimulus
	for d.chance(0.8) {
		s := plan.Stimulus{T: d.time(span, grain), Site: event.SiteID(d.IntN(sites)), Rule: event.Premature}
		out = append(out, s)
		if d.chance(0.2) {
			cycle := tick.MS(d.ms(100, 400, 10))
			s.Rule = event.Train
			for range d.int(1, 8) {
				s.T = s.T.Add(cycle)
				out = append(out, s)
			}
		}
	}
	return out
}

// changed is the heart with other numbers in some of its parts.
func (d dice) changed(h *heart.Heart, grain float64) *heart.Heart {
	c := *h
	c.Sites, c.Paths, c.Foci = append([]heart.Site(nil), h.Sites...), append([]heart.Path(nil), h.Paths...), append([]heart.Focus(nil), h.Foci...)
	for i := range c.Sites {
		if d.chance(0.3) {
			c.Sites[i].Refractory = d.cycled(10, 300, grain)
		}
	}
	for i := range c.Paths {
		p := &c.Paths[i]
		if d.chance(0.3) {
			p.Down = d.conduct(grain)
		}
		if d.chance(0.3) {
			p.Up = d.conduct(grain)
		}
		if d.chance(0.2) {
			p.Drop = d.drop()
		}
	}
	for i := range c.Foci {
		if f := &c.Foci[i]; d.chance(0.3) {
			f.Jitter, f.Protected, f.OverdriveGain, f.OverdriveTau = tick.MS(d.ms(1, 50, grain)), d.chance(0.5), d.between(0, 1), tick.Second
		}
	}
	return &c
}

// clinical is a heart made of clinical numbers, or nil where they do not fit.
func (d dice) clinical() *plan.Program {
	const span = 2000 * tick.Time(tick.Millisecond)
	cycled := func(ms, slope float64) heart.Cycled {
		return heart.Cycled{BaseMS: ms, PerCycle: slope, CycleMS: heart.DriveMS, FloorMS: ms / 2}
	}
	direct := func(lo, hi float64) heart.Direct {
		c := heart.Direct{MinMS: d.between(lo, hi), AlphaMS: d.either(0.5, 0, d.between(10, 200)), TauMS: d.between(50, 200),
			ThetaMS: d.between(50, 400), ThetaPerCycle: d.either(0.6, 0, d.between(-0.2, 0.2)), Inner: d.either(0.5, 1, d.between(0.3, 1))}
		if c.NoUp = d.chance(0.1); !c.NoUp && d.chance(0.3) {
			up := c
			up.MinMS, up.ThetaMS = d.between(lo, hi), d.between(50, 400)
			c.Up = &up
		}
		c.Drop = d.rarely()
		return c
	}
	bundle := func(erp, slope float64) heart.BundleNumbers {
		b := heart.BundleNumbers{Closed: d.chance(0.1), DelayMS: d.either(0.7, 0, d.between(0, 100)), Drop: d.rarely()}
		if erp > 0 || d.chance(0.2) {
			b.ERPMS, b.ThetaPerCycle = d.between(250, 500), slope
		}
		return b
	}
	n := &heart.Numbers{
		Sinus: heart.SinusNumbers{Rate: d.rate(span, 0), JitterMS: d.either(0.6, 0, d.between(0, 100)), FirstMS: d.between(1, 400),
			OverdriveGain: d.either(0.5, 0, d.Float64()), OverdriveTauS: d.between(0.1, 10), Exit: direct(20, 120)},
		AtriumERP: cycled(d.between(120, 300), heart.SlopeAtrium), VentricERP: cycled(d.between(150, 320), heart.SlopeVentricle),
		Fast: heart.NodeNumbers{AHMS: d.between(55, 160), ERPMS: d.between(220, 380), WCLMS: d.between(290, 500), VAMS: d.between(150, 330),
			NoDown: d.chance(0.1), NoUp: d.chance(0.3), VADefault: d.chance(0.5), Inner: d.between(0.4, 1), UpReach: d.either(0.3, 0, d.Float64()), DownReach: d.either(0.3, 0, d.Float64()), Drop: d.rarely()},
		Slow:      heart.NodeNumbers{Absent: d.chance(0.5), ByCurve: true, Direct: direct(100, 300)},
		AHCycleMS: 800, ERPCycleMS: 600,
		Lower: heart.Lower{Direct: direct(5, 20)}, HVMS: d.between(35, 80),
		Right: bundle(340, heart.SlopeBundle), Left: bundle(310, 0.12), Anterior: bundle(0, 0), Posterior: bundle(0, 0), Septal: bundle(0, 0),
		QuantumUS: step,
	}
	names := heart.SiteNames()
	for d.chance(0.5) {
		n.Foci = append(n.Foci, heart.FocusNumbers{Site: names[d.IntN(len(names))], Rate: d.rate(span, 0), JitterMS: d.either(0.5, 0, d.between(0, 200)),
			FirstMS: d.either(0.5, 0, d.between(1, 1500)), Protected: d.chance(0.4), OverdriveGain: d.either(0.5, 0, d.Float64()), OverdriveTauS: d.between(0.1, 10)})
	}
	for d.chance(0.5) && len(n.Pathways) < 3 {
		n.Pathways = append(n.Pathways, d.pathway())
	}
	if d.chance(0.3) {
		n.Rhythm = heart.AtrialRhythm{Driver: heart.Driver(d.int(1, 2)), CycleMS: d.between(170, 350), EndsBelowMS: d.either(0.5, 0, d.between(100, 300)),
			LeastMS: d.between(60, 160), FromMS: d.between(0, 800), UntilMS: d.either(0.5, 0, d.between(100, 2000))}
	}
	h, err := heart.New(n)
	if err != nil {
		return nil
	}
	return &plan.Program{Heart: h, Span: span, Seed: d.Uint64(), Stimuli: d.stimuli(len(h.Sites), span, 0)}
}

// pathway is an accessory pathway, one-way or both ways.
func (d dice) pathway() heart.PathwayNumbers {
	a, v := heart.AtrialSites(), heart.VentricularSites()
	return heart.PathwayNumbers{Atrium: a[d.IntN(len(a))], Ventricle: v[d.IntN(len(v))],
		DownMS: d.between(5, 120), UpMS: d.between(5, 120), NoDown: d.chance(0.3), NoUp: d.chance(0.3),
		DownERPMS: d.between(130, 400), UpERPMS: d.between(130, 400), ERPCycleMS: 600, ERPPerCycle: d.either(0.3, 0, d.between(-0.2, 0.4)),
		Inner: d.either(0.5, 1, d.between(0.3, 1)), DownReach: d.either(0.5, 0, d.Float64()), UpReach: d.either(0.5, 0, d.Float64()), Drop: d.rarely()}
}

func (d dice) rarely() heart.Drop {
	if d.chance(0.8) {
		return heart.Drop{}
	}
	return d.drop()
}
