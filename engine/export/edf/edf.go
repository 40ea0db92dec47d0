// Package edf writes EDF+ files: sampled signals with annotations, contiguous (EDF+C).
//
// Source: Kemp B, Olivan J. European data format 'plus' (EDF+). Clin Neurophysiol
// 2003;114:1755-61, and its full specification at edfplus.info, both from memory; the
// tests read what is written with another program's library and with a reader of their
// own.
//
// A file holds no identity: the patient field is "X X X X", and without a start date
// the recording field is "Startdate X X X ..." with the date that the format names for
// that case, 1 January 1985.
//
// Signals are millivolts at [Rate] samples a second, written in microvolts as 16-bit
// numbers in steps of [QuantumUV]. Data records are one second long; the last one is
// filled up with the last sample, and the annotation "Recording ends" says where the
// signals end. Every annotation stands in the record of its second.
package edf

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"time"
	"unicode/utf8"

	"escapement/engine/tick"
)

// Rate is the samples a second of every signal, QuantumUV one step of a sample in
// microvolts. Amplitudes reach from LeastMV to MostMV.
const (
	Rate      = 1000
	QuantumUV = 0.5
	LeastMV   = -16.384
	MostMV    = 16.3835
)

const (
	recordUS  = int64(tick.Second)
	leastStep = math.MinInt16
	mostStep  = math.MaxInt16
)

// Signal is one lead. Its label has up to 16 printable ASCII letters.
type Signal struct {
	Label string
	MV    []float32
}

// Annotation is a text at a time, with a duration where it has one.
type Annotation struct {
	Onset    tick.Time
	Duration tick.Dur // 0: none
	Text     string
}

// Recording is what a file holds. Signals are of equal length and begin at the start of
// the strip.
type Recording struct {
	Start       time.Time // zero: no date is given away
	Equipment   string    // what made it: one word
	Transducer  string
	Signals     []Signal
	Annotations []Annotation
}

// TextLimit is the most bytes in one annotation; a longer text goes on in further ones
// at the same time. Readers cut what is longer than 512.
const TextLimit = 500

// Write writes the file. It fails, without writing, where the signals are missing, of
// unequal length, or hold an amplitude beyond LeastMV and MostMV.
func Write(w io.Writer, r *Recording) error {
	records, err := r.check()
	if err != nil {
		return err
	}
	tals, size, err := r.annotations(records)
	if err != nil {
		return err
	}
	b := bufio.NewWriter(w)
	b.WriteString(r.header(records, size/2))
	for k := range records {
		for i := range r.Signals {
			samples(b, r.Signals[i].MV, k*Rate)
		}
		b.Write(tals[k])
		for range size - len(tals[k]) {
			b.WriteByte(0)
		}
	}
	return b.Flush()
}

// check gives the number of data records.
func (r *Recording) check() (int, error) {
	if len(r.Signals) == 0 || len(r.Signals[0].MV) == 0 {
		return 0, fmt.Errorf("edf: no signal to write")
	}
	n := len(r.Signals[0].MV)
	for i := range r.Signals {
		s := &r.Signals[i]
		if len(s.MV) != n {
			return 0, fmt.Errorf("edf: %s has %d samples and %s has %d; all have as many", s.Label, len(s.MV), r.Signals[0].Label, n)
		}
		for k, v := range s.MV {
			if mv := float64(v); !(mv >= LeastMV && mv <= MostMV) {
				return 0, fmt.Errorf("edf: %s at %d ms is %g mV; the file holds %g to %g mV", s.Label, k, v, LeastMV, MostMV)
			}
		}
	}
	return (n + Rate - 1) / Rate, nil
}

// samples writes a second of a signal as little-endian steps.
func samples(b *bufio.Writer, mv []float32, from int) {
	for k := from; k < from+Rate; k++ {
		v := int16(math.RoundToEven(float64(mv[min(k, len(mv)-1)]) * (1000 / QuantumUV)))
		b.WriteByte(byte(v))
		b.WriteByte(byte(uint16(v) >> 8))
	}
}

// header is the fixed part and the part of each signal, the annotations' last.
func (r *Recording) header(records, annotationSamples int) string {
	var h strings.Builder
	put := func(width int, text string) { h.WriteString(field(text, width)) }
	date, clock, day := "01.01.85", "00.00.00", "X"
	if !r.Start.IsZero() {
		date, clock = r.Start.Format("02.01.06"), r.Start.Format("15.04.05")
		day = strings.ToUpper(r.Start.Format("02-Jan-2006"))
	}
	n := len(r.Signals) + 1
	put(8, "0")
	put(80, "X X X X")
	put(80, "Startdate "+day+" X X "+word(r.Equipment))
	put(8, date)
	put(8, clock)
	put(8, strconv.Itoa(256*(n+1)))
	put(44, "EDF+C")
	put(8, strconv.Itoa(records))
	put(8, "1")
	put(4, strconv.Itoa(n))
	each := func(width int, of func(s *Signal) string, last string) {
		for i := range r.Signals {
			put(width, of(&r.Signals[i]))
		}
		put(width, last)
	}
	same := func(text string) func(*Signal) string { return func(*Signal) string { return text } }
	each(16, func(s *Signal) string { return s.Label }, "EDF Annotations")
	each(80, same(r.Transducer), "")
	each(8, same("uV"), "")
	each(8, same(strconv.FormatFloat(leastStep*QuantumUV, 'f', -1, 64)), "-1")
	each(8, same(strconv.FormatFloat(mostStep*QuantumUV, 'f', -1, 64)), "1")
	each(8, same(strconv.Itoa(leastStep)), strconv.Itoa(leastStep))
	each(8, same(strconv.Itoa(mostStep)), strconv.Itoa(mostStep))
	each(80, same(""), "")
	each(8, same(strconv.Itoa(Rate)), strconv.Itoa(annotationSamples))
	each(32, same(""), "")
	return h.String()
}

// field is a text in printable ASCII, of the width.
func field(text string, width int) string {
	b := make([]byte, 0, width)
	for _, r := range text {
		if r < ' ' || r > '~' {
			r = '?'
		}
		if len(b) < width {
			b = append(b, byte(r))
		}
	}
	for len(b) < width {
		b = append(b, ' ')
	}
	return string(b)
}

// word is a text as one subfield: without spaces, X where there is none.
func word(text string) string {
	if text = strings.Join(strings.Fields(text), "_"); text == "" {
		return "X"
	}
	return text
}

// annotations gives the time-stamped lists of every record and the even size that holds
// the longest.
func (r *Recording) annotations(records int) ([][]byte, int, error) {
	tals := make([][]byte, records)
	for k := range tals {
		tals[k] = tal(tick.Time(int64(k)*recordUS), 0, "")
	}
	list := slices.Clone(r.Annotations)
	n := len(r.Signals[0].MV)
	list = append(list, Annotation{Onset: tick.Time(n) * tick.Time(tick.Second/Rate), Text: "Recording ends"})
	slices.SortStableFunc(list, func(a, b Annotation) int { return int(a.Onset - b.Onset) })
	for _, a := range list {
		if a.Onset < 0 || a.Duration < 0 {
			return nil, 0, fmt.Errorf("edf: the annotation %q is at %v ms for %v ms; times are not below 0", a.Text, a.Onset, a.Duration)
		}
		k := min(int(int64(a.Onset)/recordUS), records-1)
		for _, part := range parts(a.Text) {
			tals[k] = append(tals[k], tal(a.Onset, a.Duration, part)...)
		}
	}
	size := 0
	for _, t := range tals {
		size = max(size, len(t)+len(t)%2)
	}
	return tals, size, nil
}

// tal is a time-stamped annotation list of one text.
func tal(onset tick.Time, d tick.Dur, text string) []byte {
	b := append([]byte{'+'}, seconds(int64(onset))...)
	if d > 0 {
		b = append(append(b, 0x15), seconds(int64(d))...)
	}
	return append(append(append(b, 0x14), text...), 0x14, 0)
}

// seconds writes microseconds as seconds with the decimals that they need.
func seconds(us int64) string {
	text := fmt.Sprintf("%d.%06d", us/1e6, us%1e6)
	return strings.TrimSuffix(strings.TrimRight(text, "0"), ".")
}

// parts cuts a text at spaces into pieces that an annotation can hold, without
// characters that have a meaning in the file.
func parts(text string) []string {
	text = strings.Map(func(r rune) rune {
		if r < ' ' || r == 0x7f || r == utf8.RuneError {
			return ' '
		}
		return r
	}, text)
	var out []string
	for len(text) > TextLimit {
		cut := TextLimit
		for !utf8.RuneStart(text[cut]) {
			cut--
		}
		if at := strings.LastIndexByte(text[:cut], ' '); at > 0 {
			cut = at
		}
		out, text = append(out, text[:cut]), strings.TrimPrefix(text[cut:], " ")
	}
	if text != "" {
		out = append(out, text)
	}
	return out
}
