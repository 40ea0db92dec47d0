package tissue

import (
	"encoding/binary"
	"errors"
	"fmt"
	"math"
)

// The file form of bipoles is little-endian like that of parts:
//
//	"bipole1", uint8 bipoles; per bipole its name, uint8 rows, uint8 strands
//	per row float32 step, uint16 triangles, int16 each; uint16 near ones: uint16 triangle, uint8 N, N*N int16
//	per strand its float32 places
const bipoleMagic = "bipole1"

// EncodeBipoles writes the file form.
func EncodeBipoles(all []Bipole) []byte {
	le := binary.LittleEndian
	b := append([]byte(bipoleMagic), byte(len(all)))
	u16 := func(v int) { b = le.AppendUint16(b, uint16(v)) }
	f32 := func(v float32) { b = le.AppendUint32(b, math.Float32bits(v)) }
	for i := range all {
		p := &all[i]
		b = append(append(b, byte(len(p.Name))), p.Name...)
		b = append(b, byte(len(p.Rows)), byte(len(p.Strands)))
		for k := range p.Rows {
			r := &p.Rows[k]
			f32(r.Step)
			u16(len(r.Far))
			for _, w := range r.Far {
				u16(int(w))
			}
			u16(len(r.Near))
			for _, n := range r.Near {
				u16(int(n.Tri))
				b = append(b, n.N)
				for _, w := range n.W {
					u16(int(w))
				}
			}
		}
		for k := range p.Strands {
			for _, v := range p.Strands[k] {
				f32(v)
			}
		}
	}
	return b
}

// DecodeBipoles reads the file form for the given parts. It refuses data that is cut
// short, goes on after its end, or does not fit the parts.
func DecodeBipoles(data []byte, parts []*Part) ([]Bipole, error) {
	r := &reader{b: data}
	if string(r.take(len(bipoleMagic))) != bipoleMagic {
		return nil, errors.New("electrodes: not in the form this program reads")
	}
	var out []Bipole
	for n := r.u8(); n > 0 && r.err == nil; n-- {
		p := Bipole{Name: r.text()}
		rows, strands := r.u8(), r.u8()
		if r.err == nil && rows != len(parts) {
			return nil, fmt.Errorf("electrodes: %s has rows for %d parts, there are %d", p.Name, rows, len(parts))
		}
		for k := 0; k < rows && r.err == nil; k++ {
			p.Rows = append(p.Rows, r.row(len(parts[k].Tri)))
		}
		for k := 0; k < strands && r.err == nil; k++ {
			var s Strand
			for i := range s {
				s[i] = r.f32()
			}
			p.Strands = append(p.Strands, s)
		}
		out = append(out, p)
	}
	if r.err == nil && len(r.b) != 0 {
		r.err = fmt.Errorf("%d bytes follow its end", len(r.b))
	}
	if r.err != nil {
		return nil, fmt.Errorf("electrodes: %w", r.err)
	}
	return out, nil
}

func (r *reader) row(triangles int) Row {
	row := Row{Step: r.f32()}
	if n := r.u16(); r.err == nil && n != triangles {
		r.err = fmt.Errorf("a row of %d triangles for a surface of %d", n, triangles)
	}
	for k := 0; k < triangles && r.err == nil; k++ {
		row.Far = append(row.Far, int16(r.i16()))
	}
	for n := r.u16(); n > 0 && r.err == nil; n-- {
		near := Near{Tri: r.node(triangles), N: uint8(r.u8())}
		if r.err == nil && near.N == 0 {
			r.err = errors.New("a triangle in no parts")
		}
		for k := int(near.N) * int(near.N); k > 0 && r.err == nil; k-- {
			near.W = append(near.W, int16(r.i16()))
		}
		row.Near = append(row.Near, near)
	}
	return row
}
