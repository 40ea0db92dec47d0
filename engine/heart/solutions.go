package heart

// Solutions remembers the curves that clinical numbers of an AV node led to, for
// whoever makes many hearts that differ elsewhere. The zero Solutions is empty. Use it
// from one goroutine.
type Solutions struct{ nodes map[nodeKey]solution }

// nodeKey is all that a curve depends on.
type nodeKey struct {
	part                                          string
	ah, erp, wcl, frp, inner, cycle, drive, lower float64
}

type solution struct {
	curve Curve
	err   error
}

// mostSolutions bounds the memory.
const mostSolutions = 5000

// node is solveNode; a nil Solutions remembers nothing.
func (s *Solutions) node(part string, n *NodeNumbers, ahCycle, driveMS, lower float64) (Curve, error) {
	if s == nil {
		return solveNode(part, n, ahCycle, driveMS, lower)
	}
	key := nodeKey{part, n.AHMS, n.ERPMS, n.WCLMS, n.FRPMS, n.Inner, ahCycle, driveMS, lower}
	if old, ok := s.nodes[key]; ok {
		return old.curve, old.err
	}
	curve, err := solveNode(part, n, ahCycle, driveMS, lower)
	if s.nodes == nil {
		s.nodes = map[nodeKey]solution{}
	}
	if len(s.nodes) < mostSolutions {
		s.nodes[key] = solution{curve, err}
	}
	return curve, err
}
