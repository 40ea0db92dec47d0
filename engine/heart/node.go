package heart

import (
	"fmt"

	"escapement/engine/portmath"
	"escapement/engine/tick"
)

// Unmet says that clinical numbers cannot hold together. Part is the place in the
// heart ("av_node.fast"); Text names the numbers and Note what would help.
type Unmet struct{ Part, Text, Note string }

func (u *Unmet) Error() string { return u.Part + ": " + u.Text }

// DefaultTauMS is the time constant of AV-nodal recovery where no functional
// refractory period is typed. (Our choice inside the range of published fits.)
const DefaultTauMS = 120

// nodeTask is the problem of one pathway: find tau, min, alpha and theta so that
// the typed numbers are measured back.
type nodeTask struct {
	ah, ahCycle    float64 // delay of the pathway alone at the cycle at which AH was measured
	erp, drive     float64
	wcl, frp       float64
	slope          float64
	tau            float64 // chosen or found
	min, alpha     float64 // found
	theta, driveAH float64 // found: theta and delay at the drive cycle
}

// solveNode turns AH, ERP, Wenckebach cycle length and, if measured, the
// functional refractory period into a curve:
//
//	f(ahCycle - ah) = ah              AH at its cycle
//	theta(drive) + f(drive - .) = ERP  the shortest conducted coupling at the drive
//	theta(WCL) + f(theta(WCL)) = WCL   where 1:1 ends
//
// with theta(c) = theta + slope (c - drive). lower is the conduction time from the
// junction to the His bundle, a part of AH.
func solveNode(part string, n *NodeNumbers, ahCycle, driveMS, lower float64) (Curve, error) {
	k := nodeTask{ah: n.AHMS - lower, ahCycle: ahCycle, erp: n.ERPMS, drive: driveMS, wcl: n.WCLMS, frp: n.FRPMS, slope: SlopeNode}
	fail := func(note, format string, a ...any) (Curve, error) {
		return Curve{}, &Unmet{part, fmt.Sprintf(format, a...), note}
	}
	switch {
	case k.ah < 1:
		return fail("AH includes the way from the junction to the His bundle", "ah_ms %g is not longer than the %g ms below the node", n.AHMS, lower)
	case n.WCLMS >= ahCycle:
		return fail("set heart.av_node.ah_at_cycle_ms to a cycle that conducts 1:1", "ah_ms %g cannot be measured at a cycle of %g ms: 1:1 conduction ends at wenckebach_cl_ms %g", n.AHMS, ahCycle, n.WCLMS)
	case n.WCLMS >= driveMS:
		return fail("set heart.av_node.erp_at_cycle_ms to a cycle that conducts 1:1", "erp_ms %g cannot be measured at a drive of %g ms: 1:1 conduction ends at wenckebach_cl_ms %g", n.ERPMS, driveMS, n.WCLMS)
	}
	if k.frp > 0 {
		if !k.fitTau() {
			return fail("leave frp_ms out, or move it nearer to the value that the other numbers give", "no time constant between 20 and 1000 ms gives frp_ms %g with ah_ms %g, erp_ms %g and wenckebach_cl_ms %g", n.FRPMS, n.AHMS, n.ERPMS, n.WCLMS)
		}
	} else if why := k.chooseTau(); why != "" {
		return fail(why, "ah_ms %g, erp_ms %g and wenckebach_cl_ms %g do not fit one recovery curve", n.AHMS, n.ERPMS, n.WCLMS)
	}
	c := k.curve()
	c.Inner = n.Inner
	if s := k.edgeSlope(); s <= -1 {
		return fail("raise erp_ms, lower wenckebach_cl_ms, or leave frp_ms out", "ah_ms %g, erp_ms %g and wenckebach_cl_ms %g need a recovery curve of slope %.2f at the edge of block, steeper than -1: long and short AH would alternate before 1:1 ends", n.AHMS, n.ERPMS, n.WCLMS, s)
	}
	return c, nil
}

func (k *nodeTask) curve() Curve {
	return Curve{MinMS: k.min, AlphaMS: k.alpha, TauMS: k.tau, Theta: Cycled{BaseMS: k.theta, PerCycle: k.slope, CycleMS: k.drive, FloorMS: 20}}
}

// edgeSlope is the slope of the curve at the last recovery of 1:1 conduction.
func (k *nodeTask) edgeSlope() float64 {
	c := k.curve()
	return c.Slope(c.Theta.At(tick.MS(k.wcl)).MS())
}

// steepest is the slope that a curve may have at its edge when its time constant
// is ours to choose: at -1 long and short AH would alternate before 1:1 ends.
const steepest = -0.9

// chooseTau takes the default time constant or, where that would make the curve
// too steep at its edge, the first longer one that does not.
func (k *nodeTask) chooseTau() (why string) {
	found := false
	for tau := float64(DefaultTauMS); tau < 1000; tau *= 1.02 {
		if why = k.solve(tau); why != "" {
			if found {
				break
			}
			continue
		}
		found = true
		if k.edgeSlope() >= steepest {
			return ""
		}
	}
	if found {
		return "raise erp_ms or lower wenckebach_cl_ms: no time constant makes this much decrement without alternation of long and short AH"
	}
	return why
}

// solve finds min, alpha and theta for a time constant. It returns what to change
// where there is no solution.
func (k *nodeTask) solve(tau float64) string {
	k.tau = tau
	// Everything follows from the delay at the drive cycle, a; the residual is zero
	// where the curve gives that delay back.
	residual := func(a float64) (float64, bool) {
		theta := k.erp - a
		wtheta := theta + k.slope*(k.wcl-k.drive)
		edge := k.wcl - wtheta // the delay of the last 1:1 cycle
		ew, eb := portmath.Exp(-wtheta/tau), portmath.Exp(-(k.ahCycle-k.ah)/tau)
		if theta <= 0 || wtheta <= 0 || edge <= 0 || ew <= eb {
			return 0, false
		}
		k.alpha = (edge - k.ah) / (ew - eb)
		k.min = k.ah - k.alpha*eb
		k.theta, k.driveAH = theta, a
		return k.min + k.alpha*portmath.Exp(-(k.drive-a)/tau) - a, true
	}
	const steps = 400
	last, lastOK, lo := 0.0, false, 0.0
	for i := 1; i < steps; i++ {
		a := k.erp * float64(i) / steps
		r, ok := residual(a)
		if ok && lastOK && (r > 0) != (last > 0) {
			root := bisect(lo, a, func(a float64) float64 { r, _ := residual(a); return r })
			if residual(root); k.alpha >= 0 && k.min >= 1 {
				return ""
			}
		}
		last, lastOK, lo = r, ok, a
	}
	if k.wcl-k.erp < 0 {
		return "wenckebach_cl_ms is shorter than erp_ms: the node would have to follow a train faster than single beats"
	}
	return "raise wenckebach_cl_ms or lower erp_ms: between them the node must have room to conduct more slowly than ah_ms"
}

// fitTau finds the time constant at which the curve has the typed functional
// refractory period at the drive, and leaves the solution for it.
func (k *nodeTask) fitTau() bool {
	miss := func(tau float64) (float64, bool) {
		if k.solve(tau) != "" {
			return 0, false
		}
		c := k.curve()
		return c.Functional() - k.frp, true
	}
	last, lastOK, lo := 0.0, false, 0.0
	for tau := 20.0; tau <= 1000; tau *= 1.03 {
		m, ok := miss(tau)
		if ok && lastOK && (m > 0) != (last > 0) {
			return k.solve(bisect(lo, tau, func(x float64) float64 { m, _ := miss(x); return m })) == ""
		}
		last, lastOK, lo = m, ok, tau
	}
	return false
}

// leastVA is the time in the node that the default VA leaves where the way outside
// it is long.
const leastVA = 40

// solveUp finds the retrograde curve of a pathway: at a ventricular drive of
// DriveMS the node takes a = VA - outside, and 1:1 ends at the retrograde
// Wenckebach cycle length where one is typed. theta is that downwards, and so is tau
// unless the curve would be too steep at its edge.
func solveUp(part string, n *NodeNumbers, down Curve, outside float64) (Curve, error) {
	a := n.VAMS - outside
	if a < leastVA && n.VADefault {
		a = leastVA
	}
	if a < 1 {
		return Curve{}, &Unmet{part, fmt.Sprintf("va_ms %g is not longer than the way outside the node, %.1f ms from the right ventricular apex to the junction and from the atrial septum to the right atrium", n.VAMS, outside), fmt.Sprintf("give va_ms over %.0f", outside+1)}
	}
	c := down
	r := DriveMS - a
	if n.VAWCL > 0 {
		theta := c.Theta.At(tick.MS(n.VAWCL)).MS()
		edge := n.VAWCL - theta
		// As downwards: a longer time constant where the curve would be too steep.
		for c.AlphaMS = -1; c.AlphaMS < 0 || c.Slope(theta) < steepest; c.TauMS *= 1.02 {
			ew, er := portmath.Exp(-theta/c.TauMS), portmath.Exp(-r/c.TauMS)
			if edge <= a || n.VAWCL >= DriveMS || ew <= er || c.TauMS > 1000 {
				return Curve{}, &Unmet{part, fmt.Sprintf("va_ms %g and va_wenckebach_cl_ms %g do not fit: at its edge retrograde conduction would take %.1f ms in the node, after %.1f ms at a drive of %d", n.VAMS, n.VAWCL, edge, a, DriveMS), fmt.Sprintf("give va_wenckebach_cl_ms between %.0f and %d", theta+a+1, DriveMS-1)}
			}
			if c.AlphaMS = (edge - a) / (ew - er); c.Slope(theta) >= steepest {
				break
			}
		}
	}
	c.MinMS = a - c.AlphaMS*portmath.Exp(-r/c.TauMS)
	if c.MinMS < 1 && n.VAWCL > 0 {
		return Curve{}, &Unmet{part, fmt.Sprintf("va_ms %g and va_wenckebach_cl_ms %g do not fit: only %.1f ms of va_ms are spent in the node, too few for so much decrement", n.VAMS, n.VAWCL, a), "lower va_wenckebach_cl_ms or raise va_ms"}
	}
	if c.MinMS < 1 {
		// A node this quick upwards has no room for the decrement it has downwards.
		c.AlphaMS = (a - 1) / portmath.Exp(-r/c.TauMS)
		c.MinMS = 1
	}
	if c.Theta.At(DriveMS*tick.Millisecond).MS() > r {
		return Curve{}, &Unmet{part, fmt.Sprintf("va_ms %g leaves %.1f ms of recovery at a drive of %d, and the node needs %.1f", n.VAMS, r, DriveMS, c.Theta.BaseMS), "lower va_ms or erp_ms"}
	}
	return c, nil
}
