package heart

import (
	"fmt"

	"escapement/engine/event"
)

// PathwayNumbers describe an accessory pathway: a strand of muscle from the atria to
// the ventricles beside the AV node. It conducts without decrement and keeps one
// state of recovery for both directions, as every path does.
type PathwayNumbers struct {
	Atrium, Ventricle string // the sites that it joins

	DownMS, UpMS       float64 // conduction time, from the one site to the other
	NoDown, NoUp       bool    // does not conduct in this direction
	DownERPMS, UpERPMS float64 // longest coupling, at the site of entry, that does not pass, at a drive of ERPCycleMS
	ERPCycleMS         float64
	ERPPerCycle        float64

	Inner              float64 // share of theta from which a blocked impulse is concealed; 1 for none
	DownReach, UpReach float64 // where a direction does not conduct: depth 0 to 1 to which impulses come
	Drop               Drop
}

// AtrialSites and VentricularSites are the ends that a pathway may have.
func AtrialSites() []string      { return chamberSites('A') }
func VentricularSites() []string { return chamberSites('V') }

func chamberSites(chamber byte) []string {
	var names []string
	for i := range sites {
		if sites[i].Chamber() == chamber {
			names = append(names, sites[i].Name)
		}
	}
	return names
}

// pathways lays the accessory pathways. They come last: a heart without them has
// the same paths by the same numbers, and VA time stays that of the AV node.
func (b *builder) pathways() error {
	for i := range b.n.Pathways {
		n := &b.n.Pathways[i]
		part := fmt.Sprintf("pathways[%d]", i)
		down, err := n.conduct(part, "down", n.DownMS, n.DownERPMS, n.NoDown, n.DownReach)
		if err != nil {
			return err
		}
		up, err := n.conduct(part, "up", n.UpMS, n.UpERPMS, n.NoUp, n.UpReach)
		if err != nil {
			return err
		}
		b.add(fmt.Sprintf("pathway_%d", i+1), "accessory pathway at the "+SiteLabel(n.Ventricle), event.Accessory, n.Atrium, n.Ventricle, down, up).Drop = n.Drop
	}
	return nil
}

// conduct is one direction. The ERP is an interval between impulses at the entrance;
// the path counts from when the last one left, one conduction time later.
func (n *PathwayNumbers) conduct(part, way string, ms, erp float64, closed bool, reach float64) (Conduct, error) {
	if !closed && erp <= ms {
		return Conduct{}, &Unmet{part + "." + way + "_erp_ms", fmt.Sprintf("%s_erp_ms %g is not longer than %s_ms %g: the impulse before would still be inside", way, erp, way, ms), fmt.Sprintf("give %s_erp_ms over %g", way, ms)}
	}
	c := Conduct{Open: !closed, Curve: Curve{MinMS: ms, Inner: n.Inner,
		Theta: Cycled{BaseMS: max(erp-ms, 1), PerCycle: n.ERPPerCycle, CycleMS: n.ERPCycleMS, FloorMS: 1, CapMS: MuscleCapMS}}}
	if closed {
		c.Reach = thousandths(reach)
	}
	return c, nil
}
