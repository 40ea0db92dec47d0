package plan

import (
	"escapement/engine/heart"
	"escapement/engine/tick"
)

// numbers gathers the clinical numbers of the heart. rate gives the course of a
// focus's rate over the strip: the path of its field and its rate at the start.
func (p *Plan) numbers(rate func(path string, bpm float64) heart.Rate) *heart.Numbers {
	const s, a, v = "heart.sinus", "heart.atria", "heart.ventricles"
	n := &heart.Numbers{
		Sinus: heart.SinusNumbers{
			Rate:          rate(s+".rate_bpm", p.number(s+".rate_bpm")),
			JitterMS:      p.number(s + ".jitter_ms"),
			FirstMS:       p.number(s + ".first_ms"),
			OverdriveGain: p.number(s + ".overdrive"),
			OverdriveTauS: p.number(s + ".overdrive_tau_s"),
			Exit:          p.direct(s + ".exit"),
		},
		AtriumERP:  cycled(p.number(a+".erp_ms"), p.number(a+".erp_per_cycle")),
		VentricERP: cycled(p.number(v+".erp_ms"), p.number(v+".erp_per_cycle")),
		Fast:       p.pathway("heart.av_node.fast"),
		Slow:       p.pathway("heart.av_node.slow"),
		AHCycleMS:  p.number("heart.av_node.ah_at_cycle_ms"),
		ERPCycleMS: p.number("heart.av_node.erp_at_cycle_ms"),
		Lower:      heart.Lower{Direct: p.direct("heart.av_node.lower")},
		HVMS:       p.number("heart.his_purkinje.hv_ms"),
		Right:      p.bundle("right_bundle"),
		Left:       p.bundle("left_bundle"),
		Anterior:   p.bundle("left_anterior"),
		Posterior:  p.bundle("left_posterior"),
		Septal:     p.bundle("left_septal"),
		Rhythm:     p.rhythm(),
	}
	for i, it := range p.Foci {
		at := func(name string) float64 { return it.number("heart.foci", name) }
		n.Foci = append(n.Foci, heart.FocusNumbers{
			Site: it["site"].Text, Rate: rate(focusPath(i, "rate_bpm"), at("rate_bpm")), JitterMS: at("jitter_ms"), FirstMS: at("first_ms"),
			Protected: it["protected"].On, OverdriveGain: at("overdrive"), OverdriveTauS: at("overdrive_tau_s"),
		})
	}
	for _, it := range p.Pathways {
		n.Pathways = append(n.Pathways, it.accessory())
	}
	return n
}

// cycled is a refractory period typed at the usual drive. It does not fall below
// three quarters of what was typed: the slopes were measured between 400 and 1000 ms.
func cycled(ms, perCycle float64) heart.Cycled {
	return heart.Cycled{BaseMS: ms, PerCycle: perCycle, CycleMS: heart.DriveMS, FloorMS: 0.75 * ms, CapMS: heart.MuscleCapMS}
}

func (p *Plan) direct(at string) heart.Direct {
	d := heart.Direct{
		MinMS: p.number(at + ".min_ms"), AlphaMS: p.number(at + ".alpha_ms"), TauMS: p.Or(at+".tau_ms", 1), ThetaMS: p.number(at + ".theta_ms"),
		ThetaPerCycle: p.number(at + ".theta_per_cycle"), Inner: 1,
	}
	// In the fast pathway the default of concealed_from is for clinical numbers.
	if v, ok := p.values[at+".concealed_from"]; ok {
		d.Inner = v.Number
	}
	d.Drop, _ = parseDrop(p.text(at + ".drop"))
	switch up := at + ".up"; {
	case byPath[up] == nil:
	case p.null(up):
		d.NoUp = true
	case p.anyGivenUnder(up):
		u := p.direct(up)
		u.ThetaPerCycle, u.Inner = d.ThetaPerCycle, d.Inner
		d.Up = &u
	}
	return d
}

func (p *Plan) pathway(at string) heart.NodeNumbers {
	if p.null(at) {
		return heart.NodeNumbers{Absent: true}
	}
	n := heart.NodeNumbers{UpReach: p.number("heart.av_node.fast.concealed_up"), DownReach: p.number("heart.av_node.fast.concealed_down")}
	n.Drop, _ = parseDrop(p.text(at + ".drop"))
	if p.byCurve(at) || at != "heart.av_node.fast" {
		n.ByCurve, n.Direct = true, p.direct(at)
		return n
	}
	n.NoDown, n.NoUp = p.null(at+".ah_ms"), p.null(at+".va_ms")
	n.AHMS, n.ERPMS, n.WCLMS, n.FRPMS = p.orDefault(at+".ah_ms"), p.number(at+".erp_ms"), p.number(at+".wenckebach_cl_ms"), p.number(at+".frp_ms")
	n.VAMS, n.VAWCL = p.orDefault(at+".va_ms"), p.number(at+".va_wenckebach_cl_ms")
	n.VADefault = !p.given(at + ".va_ms")
	n.Inner = p.number(at + ".concealed_from")
	return n
}

// orDefault is the number at a path, or its default where null stands there.
func (p *Plan) orDefault(path string) float64 {
	if p.null(path) {
		return *byPath[path].Default
	}
	return p.number(path)
}

func (p *Plan) bundle(name string) heart.BundleNumbers {
	at := "heart.his_purkinje." + name
	if p.null(at) {
		return heart.BundleNumbers{Closed: true}
	}
	b := heart.BundleNumbers{ERPMS: p.number(at + ".erp_ms"), ThetaPerCycle: p.number(at + ".erp_per_cycle"), DelayMS: p.number(at + ".delay_ms")}
	b.Drop, _ = parseDrop(p.text(at + ".drop"))
	return b
}

// span is the length of the strip.
func (p *Plan) span() tick.Time { return tick.Time(tick.MS(p.number("span_ms"))) }
