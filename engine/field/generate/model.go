package main

import (
	"math"

	"escapement/engine/field/tissue"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/spatial/r3"
)

// model is everything the generator computes.
type model struct {
	p                 *Parameters
	v                 *ventricles
	a                 *atria
	ventricles, atria *tissue.Part
	c                 *conductor
	leadsV            *mat.Dense // 8 leads x triangles, mV per full depolarisation; before rounding
	recoveryV         []float64  // ms
}

func build(p *Parameters) (*model, error) {
	m := &model{p: p, v: buildVentricles(p)}
	m.a = buildAtria(p, m.v)
	c, err := newConductor(append([]shell{p.torso()}, m.v.bloodShells()...), p.electrodes())
	if err != nil {
		return nil, err
	}
	m.c = c
	mv := p.Conductor.Amplitude * p.Conductor.PotentialSwing
	m.leadsV = leads(c.transfer(m.v.x, m.v.tri, true), mv)
	m.ventricles = &tissue.Part{
		Name: "ventricles", Graph: tissue.NewGraph(len(m.v.x), links(len(m.v.x), m.v.edges)), Entries: m.v.entries(),
		X: points(m.v.x), Shape: tissue.Shape{Rise: float32(p.Recovery.Rise), Fall: float32(p.Recovery.Fall), Fall2: float32(p.Recovery.Fall2)},
		Tri: triangles(m.v.tri, len(m.v.x)),
	}
	for n, l := range m.v.layer {
		kind := tissue.Kind(l) // the layers are numbered alike
		if l == LeftOuter && m.v.septal(n) {
			kind = tissue.RightSeptum
		}
		m.ventricles.Kind = append(m.ventricles.Kind, kind)
	}
	m.recoveryV = m.v.recovery(m.ventricles)
	m.atria = atrialPart(p, m.a, c)
	for _, ms := range m.recoveryV {
		m.ventricles.APD = append(m.ventricles.APD, microseconds(ms))
	}
	setWeights(m.ventricles, m.leadsV)
	return m, nil
}

// atrialLeads are the weights of the atrial surface.
func atrialLeads(p *Parameters, a *atria, c *conductor) *mat.Dense {
	return leads(c.transfer(a.skin, a.tri, true), p.Conductor.Amplitude*p.Conductor.PotentialSwing*p.Atria.Amplitude)
}

func atrialPart(p *Parameters, a *atria, c *conductor) *tissue.Part {
	out := &tissue.Part{
		Name: "atria", Graph: tissue.NewGraph(len(a.x), links(len(a.x), a.edges)), Entries: a.entries(),
		X: points(a.x), Shape: tissue.Shape{Rise: float32(p.Recovery.Rise), Fall: float32(p.Atria.Fall), Fall2: float32(p.Atria.Fall2)},
		Tri: triangles(a.tri, len(a.x)),
	}
	for _, c := range a.chamber {
		out.Kind = append(out.Kind, tissue.RightAtrium+tissue.Kind(c))
		out.APD = append(out.APD, microseconds(p.Atria.Duration))
	}
	setWeights(out, atrialLeads(p, a, c))
	return out
}

// recovery is the action potential duration of each ventricular node, ms. It
// depends on when the node is depolarised in the normal beat and is a fixed
// property from then on, so that abnormal sequences get their own T waves.
func (v *ventricles) recovery(p *tissue.Part) []float64 {
	r := &v.p.Recovery
	var normal []tissue.Seed
	for i := range v.p.fascicles() {
		e := &p.Entries[i]
		at := microseconds(v.p.fascicleAt(e.Site))
		for _, port := range e.Ports {
			normal = append(normal, tissue.Seed{Node: port.Node, At: at + port.At})
		}
	}
	var s tissue.Solver
	at := s.Arrivals(&p.Graph, normal)
	first := int32(math.MaxInt32)
	for _, t := range at {
		first = min(first, t)
	}
	out := make([]float64, len(v.x))
	for n := range v.x {
		out[n] = r.Duration + r.Base*(v.height(n)-0.5) + r.PerMS*(float64(at[n]-first)/1000-20)
		switch l := v.layer[n]; {
		case l == LeftMiddle:
			out[n] += 0.5 * r.Outer
		case l == LeftOuter && v.septal(n):
			out[n] += 0.35 * r.Outer
		case l == LeftOuter:
			out[n] += r.Outer
		case l == RightOuter:
			out[n] += 0.6*r.Outer + r.Right
		case l == RightInner:
			out[n] += r.Right
		}
	}
	return out
}

// septal tells whether a node of the left outer layer faces the right cavity.
func (v *ventricles) septal(n int) bool {
	i, j := v.column[n], v.ring[n]
	return i >= v.first && i <= v.last && j >= v.p.Ventricles.RightRow
}

// leads makes I, II and V1 to V6 of the potentials at the nine electrodes.
func leads(e *mat.Dense, scale float64) *mat.Dense {
	_, n := e.Dims()
	out := mat.NewDense(tissue.Leads, n, nil)
	for j := 0; j < n; j++ {
		ra, la, ll := e.At(0, j), e.At(1, j), e.At(2, j)
		out.Set(0, j, scale*(la-ra))
		out.Set(1, j, scale*(ll-ra))
		for k := 0; k < 6; k++ {
			out.Set(2+k, j, scale*(e.At(3+k, j)-(ra+la+ll)/3))
		}
	}
	return out
}

func points(x []r3.Vec) [][3]float32 {
	out := make([][3]float32, len(x))
	for i, p := range x {
		out[i] = [3]float32{float32(p.X), float32(p.Y), float32(p.Z)}
	}
	return out
}

// triangles on nodes; point k of a doubled sheet belongs to node k modulo n.
func triangles(tri [][3]int, n int) [][3]uint16 {
	out := make([][3]uint16, len(tri))
	for i, t := range tri {
		out[i] = [3]uint16{uint16(t[0] % n), uint16(t[1] % n), uint16(t[2] % n)}
	}
	return out
}

func setWeights(p *tissue.Part, leads *mat.Dense) {
	for l := range p.Weights {
		p.SetWeights(l, leads.RawRowView(l))
	}
}
