package membrane

import (
	"escapement/engine/lead"
	"escapement/engine/portmath"
	"escapement/engine/tick"
)

// painter fills a trace.
type painter struct {
	t     *Trace
	fall  []float64
	climb *climb // nil: no focus
}

// paint goes from one activation to the next.
func (p *painter) paint(all []activation) {
	rest := func(k int) float64 { return p.base(tick.Time(k) * tick.Time(lead.Step)) }
	n := len(p.t.MV)
	first := n
	if len(all) > 0 {
		first = min(ceil(all[0].at), n)
	}
	for k := range first {
		p.t.MV[k] = float32(rest(k))
	}
	for i, a := range all {
		end := n
		if i+1 < len(all) {
			end = min(ceil(all[i+1].at), n)
		}
		p.beat(a, ceil(a.at), end)
	}
}

// beat is one action potential and the phase 4 after it, samples from to end.
func (p *painter) beat(a activation, from, end int) {
	lasts := a.until.Sub(a.at).MS()
	if p.t.nodal {
		lasts *= nodalShare
	}
	before := p.t.Rest
	if p.climb != nil {
		before = p.t.Threshold
	}
	if from > 0 && from <= len(p.t.MV) {
		before = float64(p.t.MV[from-1])
	}
	middle := 5 / p.t.upstroke // so that nothing shows before the site's time
	for k := from; k < end; k++ {
		ms := (tick.Time(k) * tick.Time(lead.Step)).Sub(a.at).MS()
		low := before
		if ms > riseMS {
			low = p.base(tick.Time(k) * tick.Time(lead.Step))
		}
		left, up := p.left(ms-lasts), 1.0
		if ms < 2*riseMS {
			up = 1 / (1 + portmath.Exp(float64(-p.t.upstroke*(ms-middle))))
		}
		v := low + float64((p.t.Plateau-low)*float64(up*left))
		if p.t.Notch > 0 && ms < 8*notchMS {
			v += float64(p.t.Notch * float64(up*float64(left*portmath.Exp(float64(-ms/notchMS)))))
		}
		p.t.MV[k] = float32(v)
	}
}

// left is the share of the action potential that is left, ms after its end.
func (p *painter) left(ms float64) float64 {
	x := ms + fallReach
	if x <= 0 {
		return 1
	}
	k := int(x)
	if k >= len(p.fall)-1 {
		return 0
	}
	late := x - float64(k)
	return float64(p.fall[k]*(1-late)) + float64(p.fall[k+1]*late)
}

// base is the potential of phase 4 at an instant.
func (p *painter) base(t tick.Time) float64 {
	if p.climb == nil {
		return p.t.Rest
	}
	return p.t.Rest + float64((p.t.Threshold-p.t.Rest)*p.climb.share(t))
}

// ceil is the first sample at or after a time.
func ceil(t tick.Time) int { return int((t + tick.Time(lead.Step) - 1) / tick.Time(lead.Step)) }
