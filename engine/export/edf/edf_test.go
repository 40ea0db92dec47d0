package edf

import (
	"bytes"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"escapement/engine/tick"
)

// found is what the reader below makes of a file.
type found struct {
	patient, recording, date, kind string
	labels                         []string
	signals                        [][]int16
	quantum                        []float64 // physical units a step
	offset                         []float64
	starts                         []string // of the records
	annotations                    []Annotation
}

// read is a second reading of the specification, independent of the writer: it goes by
// the header alone. Source: as for the package.
func read(t interface{ Fatalf(string, ...any) }, file []byte) *found {
	at := 0
	next := func(n int) string {
		if at+n > len(file) {
			t.Fatalf("the file ends at %d, asked for %d more at %d", len(file), n, at)
		}
		s := string(file[at : at+n])
		at += n
		return strings.TrimRight(s, " ")
	}
	number := func(text string) float64 {
		v, err := strconv.ParseFloat(text, 64)
		if err != nil {
			t.Fatalf("%q is not a number", text)
		}
		return v
	}
	f := &found{}
	if v := next(8); v != "0" {
		t.Fatalf("version %q", v)
	}
	f.patient, f.recording = next(80), next(80)
	f.date = next(8)
	next(8)
	header := int(number(next(8)))
	f.kind = next(44)
	records := int(number(next(8)))
	if d := next(8); d != "1" {
		t.Fatalf("duration of a record %q", d)
	}
	n := int(number(next(4)))
	if header != 256*(n+1) {
		t.Fatalf("header of %d bytes for %d signals", header, n)
	}
	column := func(width int) []string {
		out := make([]string, n)
		for i := range out {
			out[i] = next(width)
		}
		return out
	}
	f.labels = column(16)
	column(80)
	column(8)
	physMin, physMax, digMin, digMax := column(8), column(8), column(8), column(8)
	column(80)
	counts := column(8)
	column(32)
	if at != header {
		t.Fatalf("the header ends at %d, not %d", at, header)
	}
	f.signals = make([][]int16, n)
	for i := range n {
		q := (number(physMax[i]) - number(physMin[i])) / (number(digMax[i]) - number(digMin[i]))
		f.quantum = append(f.quantum, q)
		f.offset = append(f.offset, number(physMin[i])-q*number(digMin[i]))
	}
	for range records {
		for i := range n {
			count := int(number(counts[i]))
			if f.labels[i] == "EDF Annotations" {
				f.lists(t, file[at:at+2*count])
				at += 2 * count
				continue
			}
			for range count {
				f.signals[i] = append(f.signals[i], int16(uint16(file[at])|uint16(file[at+1])<<8))
				at += 2
			}
		}
	}
	if at != len(file) {
		t.Fatalf("%d bytes are left over", len(file)-at)
	}
	return f
}

// lists reads the annotations of a record.
func (f *found) lists(t interface{ Fatalf(string, ...any) }, b []byte) {
	for k, list := range bytes.Split(bytes.TrimRight(b, "\x00"), []byte{0}) {
		head, texts, ok := strings.Cut(string(list), "\x14")
		if !ok || !strings.HasSuffix(texts, "\x14") || head[0] != '+' {
			t.Fatalf("list %q", list)
		}
		if k == 0 {
			f.starts = append(f.starts, head)
			if texts != "\x14" {
				t.Fatalf("the first list of a record is %q", list)
			}
			continue
		}
		onset, duration, has := strings.Cut(head[1:], "\x15")
		a := Annotation{Onset: micro(t, onset), Text: strings.TrimSuffix(texts, "\x14")}
		if has {
			a.Duration = tick.Dur(micro(t, duration))
		}
		f.annotations = append(f.annotations, a)
	}
}

func micro(t interface{ Fatalf(string, ...any) }, text string) tick.Time {
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatalf("time %q", text)
	}
	return tick.Time(math.Round(v * 1e6))
}

// Any samples come back to half a step, any times to the microsecond, any texts as they
// were but for control characters.
func TestWhatIsWrittenIsRead(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 2600).Draw(t, "samples")
		r := &Recording{Equipment: "test"}
		for i := range rapid.IntRange(1, 3).Draw(t, "signals") {
			mv := make([]float32, n)
			scale := rapid.Float32Range(0, 16).Draw(t, "scale")
			for k := range mv {
				mv[k] = scale * float32(math.Sin(float64(k*(i+1))/37))
			}
			mv[rapid.IntRange(0, n-1).Draw(t, "at")] = rapid.Float32Range(-16.38, 16.38).Draw(t, "mv")
			r.Signals = append(r.Signals, Signal{fmt.Sprintf("ECG %d", i), mv})
		}
		for range rapid.IntRange(0, 8).Draw(t, "annotations") {
			r.Annotations = append(r.Annotations, Annotation{
				tick.Time(rapid.Int64Range(0, int64(n)*1000).Draw(t, "onset")), tick.Dur(rapid.Int64Range(0, 5e6).Draw(t, "duration")),
				rapid.StringMatching(`[a-zA-Zµ°–0-9,.:= ]{1,40}`).Draw(t, "text")})
		}
		var b bytes.Buffer
		if err := Write(&b, r); err != nil {
			t.Fatal(err)
		}
		f := read(t, b.Bytes())
		for i, s := range r.Signals {
			for k, v := range s.MV {
				got := f.offset[i] + f.quantum[i]*float64(f.signals[i][k])
				if math.Abs(got-1000*float64(v)) > QuantumUV/2+1e-9 {
					t.Fatalf("%s at %d ms: %g uV, want %g", s.Label, k, got, 1000*v)
				}
			}
		}
		if len(f.annotations) != len(r.Annotations)+1 {
			t.Fatalf("%d annotations, want %d and the end", len(f.annotations), len(r.Annotations))
		}
		left := append([]Annotation{{tick.Time(n) * 1000, 0, "Recording ends"}}, r.Annotations...)
		for i, a := range f.annotations {
			if i > 0 && a.Onset < f.annotations[i-1].Onset {
				t.Fatalf("%v comes after %v", a, f.annotations[i-1])
			}
			at := -1
			for j := range left {
				if left[j] == a {
					at = j
				}
			}
			if at < 0 {
				t.Fatalf("%q was not written as such: %q", a, left)
			}
			left = append(left[:at:at], left[at+1:]...)
		}
		for k, s := range f.starts {
			if s != fmt.Sprintf("+%d", k) {
				t.Fatalf("record %d begins at %q", k, s)
			}
		}
	})
}

func flat(n int) []Signal { return []Signal{{"ECG II", make([]float32, n)}} }

func TestHeaderGivesNobodyAway(t *testing.T) {
	var b bytes.Buffer
	if err := Write(&b, &Recording{Signals: flat(10), Equipment: "escapement 1.0"}); err != nil {
		t.Fatal(err)
	}
	f := read(t, b.Bytes())
	if f.patient != "X X X X" || f.recording != "Startdate X X X escapement_1.0" || f.date != "01.01.85" || f.kind != "EDF+C" {
		t.Errorf("got %q, %q, %q, %q", f.patient, f.recording, f.date, f.kind)
	}
	b.Reset()
	if err := Write(&b, &Recording{Signals: flat(10), Start: time.Date(2026, 3, 2, 8, 9, 10, 0, time.UTC)}); err != nil {
		t.Fatal(err)
	}
	if f = read(t, b.Bytes()); f.recording != "Startdate 02-MAR-2026 X X X" || f.date != "02.03.26" {
		t.Errorf("got %q, %q", f.recording, f.date)
	}
}

func TestALongTextGoesOn(t *testing.T) {
	text := strings.TrimSpace(strings.Repeat("wörter ", 200))
	var b bytes.Buffer
	if err := Write(&b, &Recording{Signals: flat(10), Annotations: []Annotation{{Text: text}, {Text: "a\x14b\x00c"}}}); err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, a := range read(t, b.Bytes()).annotations {
		if len(a.Text) > TextLimit {
			t.Errorf("%d bytes in one annotation", len(a.Text))
		}
		got = append(got, a.Text)
	}
	if all := strings.Join(got, " "); all != text+" a b c Recording ends" {
		t.Errorf("got %q", all)
	}
}

func TestRefusals(t *testing.T) {
	loud := flat(10)
	loud[0].MV[3] = 17
	silent := flat(10)
	silent[0].MV[4] = float32(math.NaN())
	for _, c := range []struct {
		name, want string
		r          Recording
	}{
		{"no signal", "no signal", Recording{}},
		{"no sample", "no signal", Recording{Signals: flat(0)}},
		{"unequal", "has 9 samples and ECG II has 10", Recording{Signals: append(flat(10), flat(9)...)}},
		{"too large", "ECG II at 3 ms is 17 mV; the file holds -16.384 to 16.3835 mV", Recording{Signals: loud}},
		{"not a number", "at 4 ms is NaN mV", Recording{Signals: silent}},
		{"before the start", "times are not below 0", Recording{Signals: flat(10), Annotations: []Annotation{{Onset: -1, Text: "x"}}}},
	} {
		var b bytes.Buffer
		if err := Write(&b, &c.r); err == nil || !strings.Contains(err.Error(), c.want) || b.Len() > 0 {
			t.Errorf("%s: got %v and %d bytes, want %q", c.name, err, b.Len(), c.want)
		}
	}
}
