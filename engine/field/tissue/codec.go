package tissue

import (
	"encoding/binary"
	"errors"
	"fmt"
	"math"
)

// The file form is little-endian and made to be small:
//
//	"muscle1", then for each of two parts
//	name, uint16 nodes; per node int16 x3 (0.01 mm), uint8 kind, uint16 APD (0.01 ms)
//	per node uint8 links to later nodes, then per link uint16 node, uint16 microseconds
//	uint16 triangles, 3 uint16 each; per lead float32 mV per step, then int16 per triangle
//	3 float32 shape; uint8 entries: name, int32 microseconds after His, uint8 ports, per port uint16 node, int32 microseconds
//
// Strings are a length byte and the bytes.
const magic = "muscle1"

// Encode writes the ventricles and the atria in the file form.
func Encode(parts ...*Part) []byte {
	b := []byte(magic)
	b = append(b, byte(len(parts)))
	for _, p := range parts {
		b = p.encode(b)
	}
	return b
}

func (p *Part) encode(b []byte) []byte {
	le := binary.LittleEndian
	text := func(s string) { b = append(append(b, byte(len(s))), s...) }
	u16 := func(v int) { b = le.AppendUint16(b, uint16(v)) }
	f32 := func(v float32) { b = le.AppendUint32(b, math.Float32bits(v)) }
	text(p.Name)
	u16(p.Graph.Nodes())
	for i, x := range p.X {
		for _, c := range x {
			u16(int(math.Round(float64(c) * 100)))
		}
		b = append(b, byte(p.Kind[i]))
		u16(int(p.APD[i]+5) / 10)
	}
	for n := range p.X {
		count, at := 0, len(b)
		b = append(b, 0)
		for k := p.Graph.First[n]; k < p.Graph.First[n+1]; k++ {
			if int(p.Graph.To[k]) > n {
				u16(int(p.Graph.To[k]))
				u16(int(p.Graph.Time[k]))
				count++
			}
		}
		b[at] = byte(count)
	}
	u16(len(p.Tri))
	for _, t := range p.Tri {
		u16(int(t[0]))
		u16(int(t[1]))
		u16(int(t[2]))
	}
	for l := range p.Weights {
		f32(p.Step[l])
		for _, w := range p.Weights[l] {
			u16(int(w))
		}
	}
	f32(p.Shape.Rise)
	f32(p.Shape.Fall)
	f32(p.Shape.Fall2)
	b = append(b, byte(len(p.Entries)))
	for _, e := range p.Entries {
		text(e.Site)
		b = le.AppendUint32(b, uint32(e.After))
		b = append(b, byte(len(e.Ports)))
		for _, s := range e.Ports {
			u16(int(s.Node))
			b = le.AppendUint32(b, uint32(s.At))
		}
	}
	return b
}

// Decode reads the file form. It refuses data that is cut short, goes on after
// its end, or names nodes that do not exist.
func Decode(data []byte) ([]*Part, error) {
	r := &reader{b: data}
	if string(r.take(len(magic))) != magic {
		return nil, errors.New("muscle model: not in the form this program reads")
	}
	parts := make([]*Part, r.u8())
	for i := range parts {
		parts[i] = r.part()
		if r.err != nil {
			return nil, fmt.Errorf("muscle model: part %d: %w", i, r.err)
		}
	}
	if len(r.b) != 0 {
		return nil, fmt.Errorf("muscle model: %d bytes follow its end", len(r.b))
	}
	return parts, nil
}

// reader takes values off the front; after the first fault it gives zeros.
type reader struct {
	b   []byte
	err error
}

func (r *reader) take(n int) []byte {
	if r.err == nil && len(r.b) < n {
		r.err = errors.New("the data is cut short")
	}
	if r.err != nil {
		return make([]byte, n)
	}
	out := r.b[:n]
	r.b = r.b[n:]
	return out
}

func (r *reader) u8() int      { return int(r.take(1)[0]) }
func (r *reader) u16() int     { return int(binary.LittleEndian.Uint16(r.take(2))) }
func (r *reader) i16() int     { return int(int16(binary.LittleEndian.Uint16(r.take(2)))) }
func (r *reader) i32() int32   { return int32(binary.LittleEndian.Uint32(r.take(4))) }
func (r *reader) f32() float32 { return math.Float32frombits(binary.LittleEndian.Uint32(r.take(4))) }
func (r *reader) text() string { return string(r.take(r.u8())) }

// node reads the number of one of n nodes.
func (r *reader) node(n int) uint16 {
	v := r.u16()
	if r.err == nil && v >= n {
		r.err = fmt.Errorf("node %d does not exist among %d", v, n)
	}
	if r.err != nil {
		return 0
	}
	return uint16(v)
}

func (r *reader) part() *Part {
	p := &Part{Name: r.text()}
	n := r.u16()
	for i := 0; i < n && r.err == nil; i++ {
		p.X = append(p.X, [3]float32{float32(r.i16()) / 100, float32(r.i16()) / 100, float32(r.i16()) / 100})
		p.Kind = append(p.Kind, Kind(r.u8()))
		p.APD = append(p.APD, int32(r.u16())*10)
	}
	var links []Link
	for i := 0; i < n && r.err == nil; i++ {
		for k := r.u8(); k > 0 && r.err == nil; k-- {
			links = append(links, Link{uint16(i), r.node(n), uint16(r.u16())})
		}
	}
	for k := r.u16(); k > 0 && r.err == nil; k-- {
		p.Tri = append(p.Tri, [3]uint16{r.node(n), r.node(n), r.node(n)})
	}
	for l := range p.Weights {
		p.Step[l] = r.f32()
		for k := 0; k < len(p.Tri) && r.err == nil; k++ {
			p.Weights[l] = append(p.Weights[l], int16(r.i16()))
		}
	}
	p.Shape = Shape{r.f32(), r.f32(), r.f32()}
	for k := r.u8(); k > 0 && r.err == nil; k-- {
		e := Entry{Site: r.text(), After: r.i32()}
		for m := r.u8(); m > 0 && r.err == nil; m-- {
			e.Ports = append(e.Ports, Seed{r.node(n), r.i32()})
		}
		p.Entries = append(p.Entries, e)
	}
	if r.err == nil {
		p.Graph = NewGraph(n, links)
	}
	return p
}
