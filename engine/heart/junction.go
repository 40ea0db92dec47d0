package heart

import (
	"fmt"

	"escapement/engine/event"
	"escapement/engine/tick"
)

// node lays the pathways of the AV node and the path below them.
func (b *builder) node() error {
	down, up := b.n.Lower.both()
	b.add("lower_node", "junction to His bundle", event.Node, "av_junction", "his", down, up).Drop = b.n.Lower.Drop
	for _, w := range []struct {
		name, part, label string
		n                 *NodeNumbers
	}{
		{"av_fast", "av_node.fast", "AV node, fast pathway", &b.n.Fast},
		{"av_slow", "av_node.slow", "AV node, slow pathway", &b.n.Slow},
	} {
		if w.n.Absent {
			continue
		}
		down, up, err := b.pathway(w.part, w.n)
		if err != nil {
			return err
		}
		b.add(w.name, w.label, event.Node, "atrial_septum", "av_junction", down, up).Drop = w.n.Drop
	}
	return nil
}

func (b *builder) pathway(part string, n *NodeNumbers) (down, up Conduct, err error) {
	if n.ByCurve {
		down, up = n.both()
		if n.Direct.NoUp {
			up.Reach = thousandths(n.UpReach)
		}
		return down, up, nil
	}
	curve := Curve{MinMS: n.AHMS, TauMS: DefaultTauMS, Inner: n.Inner,
		Theta: Cycled{BaseMS: max(n.ERPMS-n.AHMS, 1), PerCycle: SlopeNode, CycleMS: b.n.ERPCycleMS, FloorMS: 20}}
	if n.NoDown {
		down = Conduct{Curve: curve, Reach: thousandths(n.DownReach)}
		if n.NoUp {
			return down, Conduct{Curve: curve, Reach: thousandths(n.UpReach)}, nil
		}
	} else {
		if curve, err = b.n.Solved.node(part, n, b.n.AHCycleMS, b.n.ERPCycleMS, b.n.Lower.MinMS); err != nil {
			return down, up, err
		}
		down = Conduct{Open: true, Curve: curve}
	}
	if n.NoUp {
		return down, Conduct{Curve: curve, Reach: thousandths(n.UpReach)}, nil
	}
	if curve, err = solveUp(part, n, curve, b.outside()); err != nil {
		return down, up, err
	}
	return down, Conduct{Open: true, Curve: curve}, nil
}

func thousandths(share float64) uint16 { return uint16(share*1000 + 0.5) }

// outside is the conduction time of a retrograde impulse outside the node, in ms:
// from the right ventricular apex to the AV junction and from the atrial septum
// to the right atrium, by the shortest way that conducts upwards.
func (b *builder) outside() float64 {
	h := b.h
	return (h.travel(h.Site("rv_apex"), h.Site("av_junction")) + h.travel(h.Site("atrial_septum"), h.Site("right_atrium"))).MS()
}

// travel is the shortest time between two sites through rested tissue, or 0 where
// there is no way. The network is small: plain relaxation until nothing changes.
func (h *Heart) travel(from, to event.SiteID) tick.Dur {
	const far = tick.Dur(tick.Never)
	at := make([]tick.Dur, len(h.Sites))
	for i := range at {
		at[i] = far
	}
	at[from] = 0
	for changed := true; changed; {
		changed = false
		for i := range h.Paths {
			p := &h.Paths[i]
			for _, d := range []event.Dir{event.Down, event.Up} {
				c, a, z := p.Dir(d), p.Entry(d), p.Exit(d)
				if c.Open && at[a] < far && at[a]+tick.MS(c.MinMS) < at[z] {
					at[z] = at[a] + tick.MS(c.MinMS)
					changed = true
				}
			}
		}
	}
	if at[to] == far {
		return 0
	}
	return at[to]
}

func (b *builder) foci() {
	s := &b.n.Sinus
	b.focus(FocusNumbers{Site: "sinus", Rate: s.Rate, JitterMS: s.JitterMS, FirstMS: s.FirstMS, OverdriveGain: s.OverdriveGain, OverdriveTauS: s.OverdriveTauS})
	for _, f := range b.n.Foci {
		b.focus(f)
	}
	b.drivers()
}

func (b *builder) focus(n FocusNumbers) {
	site := b.h.Site(n.Site)
	if site < 0 {
		panic(fmt.Sprintf("heart: a focus at %q, which is no site", n.Site))
	}
	b.h.Foci = append(b.h.Foci, Focus{Site: site, Rate: n.Rate, Jitter: tick.MS(n.JitterMS), Protected: n.Protected,
		First: tick.MS(n.FirstMS), OverdriveGain: n.OverdriveGain, OverdriveTau: tick.MS(1000 * n.OverdriveTauS)})
}
