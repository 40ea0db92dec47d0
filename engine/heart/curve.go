package heart

import (
	"math"

	"escapement/engine/portmath"
	"escapement/engine/tick"
)

// Curve is the recovery curve of a path in one direction, the one-variable map of
// Shrier et al. (Circulation 1987;76:1196-1205): with r the time since an impulse
// last left the path, the delay is
//
//	MinMS + AlphaMS * exp(-r/TauMS)   if r >= theta
//
// and the impulse is blocked if r is shorter. With AlphaMS 0 the path is
// all-or-none, as the His-Purkinje system is.
type Curve struct {
	MinMS   float64 // delay after full recovery
	AlphaMS float64 // how much longer the delay would be at r = 0
	TauMS   float64 // time constant of recovery; not used when AlphaMS is 0
	Theta   Cycled  // shortest recovery that conducts

	// Inner is the share of theta after which a blocked impulse still enters: it
	// comes to a depth between 0 and 1 and leaves the path refractory, as if it had
	// left there (concealed penetration). 1 or more means that none does.
	Inner float64

	// FirstMS is the recovery assumed for the first impulse of the strip, which no
	// other has gone before; 0 for complete recovery.
	FirstMS float64
}

// Delay is the conduction time after recovery r.
func (c *Curve) Delay(r tick.Dur) tick.Dur { return tick.MS(c.DelayMS(r.MS())) }

// DelayMS is Delay in milliseconds, before rounding.
func (c *Curve) DelayMS(r float64) float64 {
	if c.AlphaMS == 0 {
		return c.MinMS
	}
	return c.MinMS + float64(c.AlphaMS*portmath.Exp(-r/c.TauMS))
}

// First is the delay of the first impulse of the strip.
func (c *Curve) First() tick.Dur {
	if c.FirstMS == 0 {
		return tick.MS(c.MinMS)
	}
	return tick.MS(c.DelayMS(c.FirstMS))
}

// Refractory is theta after a preceding cycle.
func (c *Curve) Refractory(cycle tick.Dur) tick.Dur { return c.Theta.At(cycle) }

// Steady is the delay of 1:1 conduction at a fixed cycle, in ms: the root a of
// a = f(cycle - a). ok is false where the path cannot follow 1:1.
func (c *Curve) Steady(cycleMS float64) (ms float64, ok bool) {
	theta := c.Theta.At(tick.MS(cycleMS)).MS()
	if c.AlphaMS == 0 {
		return c.MinMS, cycleMS-c.MinMS >= theta
	}
	// g(a) = f(cycle-a) - a: positive at a = min; where the slope of f is above -1
	// it falls, so there is one root between min and cycle-theta, if any.
	hi := cycleMS - theta
	if hi < c.MinMS || c.DelayMS(cycleMS-hi) > hi {
		return 0, false
	}
	return bisect(c.MinMS, hi, func(a float64) float64 { return c.DelayMS(cycleMS-a) - a }), true
}

// ShortestOneToOne is the shortest cycle that the path follows 1:1 when theta does
// not depend on the cycle: theta + f(theta). (Exact consequence of the curve for
// slopes above -1.)
func (c *Curve) ShortestOneToOne() float64 {
	return c.Theta.BaseMS + c.DelayMS(c.Theta.BaseMS)
}

// Functional is the functional refractory period, the shortest interval between
// two impulses leaving the path: the least of r + f(r) over r >= theta, in ms.
// Where the slope reaches -1 that is r* + min + tau with r* = tau ln(alpha/tau).
func (c *Curve) Functional() float64 {
	theta := c.Theta.BaseMS
	if c.AlphaMS > 0 {
		if r := c.TauMS * portmath.Log(c.AlphaMS/c.TauMS); r > theta {
			return r + c.MinMS + c.TauMS
		}
	}
	return theta + c.DelayMS(theta)
}

// Slope is the derivative of the delay at recovery r ms; never positive.
func (c *Curve) Slope(r float64) float64 {
	if c.AlphaMS == 0 {
		return 0
	}
	return -c.AlphaMS / c.TauMS * portmath.Exp(-r/c.TauMS)
}

// bisect finds a root of f between lo and hi, where f(lo) and f(hi) differ in sign.
func bisect(lo, hi float64, f func(float64) float64) float64 {
	rising := f(hi) > 0
	for i := 0; i < 200 && hi-lo > 1e-12*(1+math.Abs(hi)); i++ {
		mid := lo + (hi-lo)/2
		if (f(mid) > 0) == rising {
			hi = mid
		} else {
			lo = mid
		}
	}
	return lo + (hi-lo)/2
}
