package scene

import (
	"math"
	"strconv"

	"escapement/engine/tick"
)

const axisLabel = "time, s"

func twoDecimals(v float64) string { return strconv.FormatFloat(v, 'f', 2, 64) }

// steps between labelled instants of the axis, in milliseconds.
var steps = [...]int64{1, 2, 5, 10, 20, 50, 100, 200, 500, 1000, 2000, 5000, 10000, 20000, 30000,
	60000, 120000, 300000, 600000, 1800000, 3600000, 7200000, 21600000, 86400000}

// step is the smallest step that is at least so many millimetres wide.
func (s *sheet) step(mm float64) tick.Dur {
	for _, ms := range steps {
		if float64(ms)/1000*s.o.MMPerS >= mm {
			return tick.Dur(ms) * tick.Millisecond
		}
	}
	return tick.Dur(steps[len(steps)-1]) * tick.Millisecond
}

// instants calls f for every multiple of the step inside the window.
func (s *sheet) instants(step tick.Dur, f func(t tick.Time)) {
	first := int64(s.o.From) / int64(step)
	for k := first; tick.Time(k*int64(step)) <= s.o.To; k++ {
		if t := tick.Time(k * int64(step)); t >= s.o.From {
			f(t)
		}
	}
}

// axis is the time axis: the spine between what is seen above it and what
// happened below.
func (s *sheet) axis() {
	h := AxisText.height(s.o.FontMM)
	y, tall := s.y+0.4*h, 0.5*h
	s.mark(Mark{Shape: Line, Class: AxisLine, X: s.Axis.X0, Y: y, X2: s.right, Y2: y})
	s.place(Mark{Shape: Text, Class: AxisText, X: pad, Y: y + tall + ascent*h, Text: axisLabel})
	widest := AxisText.Width(seconds(s.o.To, tick.Millisecond), s.o.FontMM)
	step := s.step(widest + 0.8*h)
	fine := step / 5
	if step%5 != 0 || float64(fine)/1e6*s.o.MMPerS < 1 {
		fine = step / 2
	}
	s.instants(fine, func(t tick.Time) {
		s.mark(Mark{Shape: Line, Class: AxisLine, X: s.Axis.X(t), Y: y, X2: s.Axis.X(t), Y2: y + tall/2})
	})
	s.instants(step, func(t tick.Time) {
		x := s.Axis.X(t)
		s.mark(Mark{Shape: Line, Class: AxisLine, X: x, Y: y, X2: x, Y2: y + tall})
		s.place(Mark{Shape: Text, Class: AxisText, X: x, Y: y + tall + ascent*h, Text: seconds(t, step), Anchor: Middle})
	})
	end := y + tall + leading*h
	s.lane("axis", axisLabel, s.y, end)
	s.y = end
}

// seconds writes an instant with the decimals that the step needs.
func seconds(t tick.Time, step tick.Dur) string {
	decimals := 0
	for unit := tick.Second; unit > 1 && step%unit != 0; unit /= 10 {
		decimals++
	}
	return strconv.FormatFloat(t.Seconds(), 'f', decimals, 64)
}

// grid draws the paper behind the leads. At paper scales it is the millimetre
// grid; at others it keeps its meaning: 40 and 200 ms, 0.1 and 0.5 mV. It is tied
// to the strip's start, so that it moves with the signal. Signals other than leads have
// lines of time alone.
func (s *sheet) grid(y0, y1 float64, paper bool) {
	dx, dy := 1.0, 1.0
	if !paperScale(s.o.MMPerS, 6.25, 12.5, 25, 50, 100, 200) {
		dx = 0.04 * s.o.MMPerS
	}
	if !paperScale(s.o.MMPerMV, 2.5, 5, 10, 20, 40) {
		dy = 0.1 * s.o.MMPerMV
	}
	zero := s.Axis.X0 - float64(s.o.From)/1e6*s.o.MMPerS
	for _, major := range [...]bool{false, true} {
		gx, gy, class := dx, dy, GridMinor
		if major {
			gx, gy, class = 5*dx, 5*dy, GridMajor
		}
		if !paper && !major {
			continue
		}
		lines(s.Axis.X0, s.right, zero, gx, major, func(x float64) {
			s.mark(Mark{Shape: Line, Class: class, X: x, Y: y0, X2: x, Y2: y1})
		})
		if !paper {
			continue
		}
		lines(y0, y1, y0, gy, major, func(y float64) {
			s.mark(Mark{Shape: Line, Class: class, X: s.Axis.X0, Y: y, X2: s.right, Y2: y})
		})
	}
}

func paperScale(v float64, scales ...float64) bool {
	for _, p := range scales {
		if v == p {
			return true
		}
	}
	return false
}

// lines calls f for the grid lines of one direction: the fine ones without the
// coarse ones among them, and none closer than can be told apart.
func lines(from, to, zero, d float64, major bool, f func(v float64)) {
	if d < 0.7 {
		return
	}
	for k := math.Ceil((from - zero) / d * (1 - 1e-12)); zero+k*d <= to+1e-9; k++ {
		if !major && math.Mod(k, 5) == 0 {
			continue
		}
		if v := zero + k*d; v >= from-1e-9 {
			f(v)
		}
	}
}
