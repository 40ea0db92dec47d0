// Package tick is time inside the engine: whole microseconds, nothing else.
//
// A [Time] is counted from the start of the strip and a [Dur] is the distance
// between two of them. Both are int64, so sums are exact and the same on every
// machine. This package holds the only rounding from floating point to time;
// at every boundary (plan file, page, drawing) a unit suffix says what a number
// is (_us, _ms, _bpm).
package tick

import (
	"math"
	"strconv"
)

// Time is an instant in microseconds from the start of the strip.
type Time int64

// Dur is a span in microseconds.
type Dur int64

// Lengths in common use.
const (
	Microsecond Dur = 1
	Millisecond Dur = 1000
	Second      Dur = 1000000
	Minute      Dur = 60 * Second
)

// Never is later than every instant a plan can reach.
const Never Time = math.MaxInt64 / 4

// MS rounds milliseconds to the nearest microsecond, halves to even. The value
// must be finite and below 10^12 in magnitude; a plan's ranges see to that.
func MS(ms float64) Dur {
	if math.IsNaN(ms) || math.Abs(ms) > 1e12 {
		panic("tick: milliseconds out of range: " + strconv.FormatFloat(ms, 'g', -1, 64))
	}
	return Dur(math.RoundToEven(ms * 1000))
}

// PerMinute is the interval of a rate in beats per minute.
func PerMinute(bpm float64) Dur { return MS(60000 / bpm) }

// MS gives the span in milliseconds.
func (d Dur) MS() float64 { return float64(d) / 1000 }

// BPM gives the rate per minute whose interval is d; 0 for a span that is not positive.
func (d Dur) BPM() float64 {
	if d <= 0 {
		return 0
	}
	return 60e6 / float64(d)
}

// MS gives the instant in milliseconds from the start of the strip.
func (t Time) MS() float64 { return float64(t) / 1000 }

// Seconds gives the instant in seconds from the start of the strip.
func (t Time) Seconds() float64 { return float64(t) / 1e6 }

// Add moves the instant by d.
func (t Time) Add(d Dur) Time { return t + Time(d) }

// Sub is the span from u to t.
func (t Time) Sub(u Time) Dur { return Dur(t - u) }

// String is the span in milliseconds with all its digits, as "1043.25".
func (d Dur) String() string { return milli(int64(d)) }

// String is the instant in milliseconds with all its digits, as "1043.25".
func (t Time) String() string { return milli(int64(t)) }

func milli(us int64) string { return strconv.FormatFloat(float64(us)/1000, 'f', -1, 64) }
