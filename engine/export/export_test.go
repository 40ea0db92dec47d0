package export

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"escapement/engine/event"
	"escapement/engine/export/edf"
	"escapement/engine/field"
	"escapement/engine/lead"
	"escapement/engine/plan"
	"escapement/engine/scene"
	"escapement/engine/sim"
	"escapement/engine/sim/simtest"
	"escapement/engine/timeline"
	"escapement/presets"
)

var update = flag.Bool("update", false, "rewrite the goldens")

func strip(t *testing.T, file []byte) *timeline.Timeline {
	t.Helper()
	s, err := timeline.Of(simtest.Play(t, string(file)).Plan, field.New())
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func preset(t *testing.T, name string) *timeline.Timeline {
	t.Helper()
	file, ok := presets.Read(name)
	if !ok {
		t.Fatalf("no preset %q", name)
	}
	return strip(t, file)
}

// short is a paced beat, small enough to be read as a golden.
var short = []byte(`{"format":"escapement-plan/1","span_ms":1500,"heart":{"av_node":{"fast":{"ah_ms":null,"va_ms":null}}},"pacemaker":{"mode":"DDD"}}`)

func TestGoldens(t *testing.T) {
	s := strip(t, short)
	for _, g := range []struct {
		file  string
		write func(*bytes.Buffer) error
	}{
		{"paced.csv", func(b *bytes.Buffer) error { return CSV(b, s) }},
		{"paced.annotations", func(b *bytes.Buffer) error {
			for _, a := range annotations(s) {
				fmt.Fprintf(b, "%v %v %s\n", a.Onset, a.Duration, a.Text)
			}
			return nil
		}},
	} {
		t.Run(g.file, func(t *testing.T) {
			var b bytes.Buffer
			if err := g.write(&b); err != nil {
				t.Fatal(err)
			}
			name := filepath.Join("testdata", g.file)
			if *update {
				if err := errors.Join(os.MkdirAll("testdata", 0o755), os.WriteFile(name, b.Bytes(), 0o644)); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(name)
			if err != nil {
				t.Fatal(err)
			}
			got, wanted := strings.Split(b.String(), "\n"), strings.Split(string(want), "\n")
			for i := range max(len(got), len(wanted)) {
				if i >= len(got) || i >= len(wanted) || got[i] != wanted[i] {
					t.Fatalf("line %d is\n got %q\nwant %q\nrun with -update and look at the difference", i+1, got[min(i, len(got)-1)], wanted[min(i, len(wanted)-1)])
				}
			}
		})
	}
}

// Every row of every preset's table has all columns, in order of time, and names only
// events that are in it.
func TestTheTableIsWhole(t *testing.T) {
	for i, e := range presets.List() {
		if testing.Short() && i%6 != 0 {
			continue
		}
		file, _ := presets.Read(e.Name)
		p, err := plan.Decode(file)
		if err != nil {
			t.Fatal(err)
		}
		log, err := sim.Run(p)
		if err != nil {
			t.Fatal(err)
		}
		var b bytes.Buffer
		if err := CSV(&b, &timeline.Timeline{Plan: p, Log: log}); err != nil {
			t.Fatal(err)
		}
		if n := bytes.Count(b.Bytes(), []byte{'\n'}); n != bytes.Count(b.Bytes(), []byte("\r\n")) || n != len(log.Events)+1 {
			t.Errorf("%s: %d lines for %d events, not all ended by CR LF", e.Name, n, len(log.Events))
		}
		rows, err := csv.NewReader(&b).ReadAll() // refuses rows of unequal length
		if err != nil {
			t.Fatalf("%s: %v", e.Name, err)
		}
		if !slices.Equal(rows[0], Columns) {
			t.Errorf("%s: columns %q", e.Name, rows[0])
		}
		for k, row := range rows[1:] {
			ev := &log.Events[k]
			if row[0] != fmt.Sprint(ev.ID) || row[1] != ev.T.String() || row[len(row)-1] == "" {
				t.Fatalf("%s: row %d is %q, want event %d at %v ms with its sentence", e.Name, k, row, ev.ID, ev.T)
			}
		}
	}
}

// The plan in the document is a plan, and gives the same events again.
func TestTheDocumentCanBeComputedAgain(t *testing.T) {
	s := preset(t, "dual-upper-rate-wenckebach")
	var b bytes.Buffer
	if err := JSON(&b, s); err != nil {
		t.Fatal(err)
	}
	var lines, squeezed bytes.Buffer
	if err := errors.Join(s.Log.WriteJSON(&lines), json.Compact(&squeezed, b.Bytes())); err != nil {
		t.Fatal(err)
	}
	for _, l := range strings.Split(strings.TrimSpace(lines.String()), "\n") {
		if !strings.Contains(squeezed.String(), l) {
			t.Fatalf("the document lacks %s", l)
		}
	}
	var d struct {
		Format, Caution, Fingerprint string
		Plan                         json.RawMessage
		Events                       []struct{ ID event.ID }
		Measure                      struct{ Statement string }
		Device                       *struct{ Arithmetic []struct{ Name string } }
	}
	if err := json.Unmarshal(b.Bytes(), &d); err != nil {
		t.Fatal(err)
	}
	again := strip(t, d.Plan)
	if got := fmt.Sprintf("%016x", again.Log.Fingerprint()); got != d.Fingerprint {
		t.Errorf("the plan in the document gives %s, the document says %s", got, d.Fingerprint)
	}
	if d.Format != Format || d.Caution != scene.CautionText || len(d.Events) != len(s.Log.Events) || d.Measure.Statement != s.Measure.Statement || d.Device == nil || len(d.Device.Arithmetic) == 0 {
		t.Errorf("got %+v", d)
	}
}

func TestTheFileSaysThatItWasComputed(t *testing.T) {
	first := annotations(preset(t, "normal"))[0]
	if first.Onset != 0 || first.Text != Computed+" "+scene.CautionText {
		t.Errorf("the first annotation is %q", first)
	}
}

// Markers, waves and findings stand at the times that the log and the report give.
func TestAnnotationsStandAtTheirTimes(t *testing.T) {
	s := preset(t, "dual-upper-rate-wenckebach")
	has := map[edf.Annotation]bool{}
	for _, a := range annotations(s) {
		has[a] = true
	}
	count := map[string]int{}
	for i := range s.Log.Events {
		e := &s.Log.Events[i]
		text := ""
		switch {
		case e.Kind == event.Stimulus && e.Rule == event.Timed:
			text = string(e.Channel) + "P"
		case e.Kind == event.Sense && (e.Use == event.Tracked || e.Use == event.Inhibits):
			text = string(e.Channel) + "S"
		default:
			continue
		}
		count[text]++
		if !has[edf.Annotation{Onset: e.T, Text: text}] {
			t.Errorf("no %s at %v ms", text, e.T)
		}
	}
	if count["AS"] < 10 || count["VP"] < 10 {
		t.Errorf("looked at %v", count)
	}
	for _, b := range s.Measure.Beats {
		if !has[edf.Annotation{Onset: b.T, Text: b.Kind}] {
			t.Errorf("no %s at %v ms", b.Kind, b.T)
		}
	}
	for _, f := range s.Measure.Findings {
		if !has[edf.Annotation{Onset: f.FromUS, Duration: f.UntilUS.Sub(f.FromUS), Text: "Finding: " + f.Text}] {
			t.Errorf("no %q", f.Text)
		}
	}
}

func TestAStripWithoutLeads(t *testing.T) {
	s := preset(t, "normal")
	s.Record = nil
	if err := EDF(&bytes.Buffer{}, s, EDFOptions{}); !errors.Is(err, ErrNoLeads) {
		t.Errorf("got %v", err)
	}
}

// Another program's library reads every sample of a whole strip to one step and every
// annotation at its time with its text.
func TestTheLibraryReadsAStrip(t *testing.T) {
	gcc, err := exec.LookPath("gcc")
	if err != nil {
		t.Skip("gcc is missing; make test installs it, or: apt-get install gcc libc6-dev libedf-dev")
	}
	program := filepath.Join(t.TempDir(), "read")
	if out, err := exec.Command(gcc, "-O1", "-o", program, "edf/testdata/read.c", "-ledf").CombinedOutput(); err != nil {
		if bytes.Contains(out, []byte("edflib.h")) || bytes.Contains(out, []byte("-ledf")) {
			t.Skip("the EDF library is missing; make test installs it, or: apt-get install libedf-dev")
		}
		t.Fatalf("gcc: %v\n%s", err, out)
	}
	for _, c := range []struct {
		preset string
		leads  []lead.Name
	}{{"dual-upper-rate-wenckebach", nil}, {"pvc-retrograde", []lead.Name{lead.V1, lead.II}}} {
		s := preset(t, c.preset)
		name := filepath.Join(t.TempDir(), "strip.edf")
		var b bytes.Buffer
		if err := errors.Join(EDF(&b, s, EDFOptions{Leads: c.leads}), os.WriteFile(name, b.Bytes(), 0o644)); err != nil {
			t.Fatal(err)
		}
		out, err := exec.Command(program, name).Output()
		if err != nil {
			t.Fatalf("%s: the library: %v\n%s", c.preset, err, out)
		}
		if c.leads == nil {
			c.leads = []lead.Name{lead.I, lead.II, lead.III, lead.AVR, lead.AVL, lead.AVF, lead.V1, lead.V2, lead.V3, lead.V4, lead.V5, lead.V6}
		}
		lines := strings.Split(strings.TrimSpace(string(out)), "\n")
		samples, texts := 0, []string{}
		at, k := -1, 0
		for _, l := range lines {
			var v float64
			if strings.HasPrefix(l, "signal ") {
				at, k = at+1, 0
				if want := "signal ECG " + c.leads[at].String() + " "; !strings.HasPrefix(l, want) {
					t.Errorf("%s: %q, want %q", c.preset, l, want)
				}
			} else if text, ok := strings.CutPrefix(l, "annotation "); ok {
				texts = append(texts, text)
			} else if n, _ := fmt.Sscan(l, &v); n == 1 && at >= 0 {
				if mv := s.Record.MV[c.leads[at]]; k < len(mv) && math.Abs(v*edf.QuantumUV-1000*float64(mv[k])) > edf.QuantumUV {
					t.Fatalf("%s: %s at %d ms is %g uV, want %g", c.preset, c.leads[at], k, v*edf.QuantumUV, 1000*mv[k])
				}
				k++
				samples++
			}
		}
		if want := len(c.leads) * len(s.Record.MV[0]); samples < want || at != len(c.leads)-1 {
			t.Errorf("%s: %d samples of %d leads, want %d of %d", c.preset, samples, at+1, want, len(c.leads))
		}
		for _, a := range annotations(s) {
			d := int64(-10000000)
			if a.Duration > 0 {
				d = 10 * int64(a.Duration)
			}
			if want := fmt.Sprintf("%d %d %s", 10*int64(a.Onset), d, a.Text); !slices.Contains(texts, want) && len(a.Text) <= edf.TextLimit {
				t.Errorf("%s: the library lacks %q", c.preset, want)
			}
		}
	}
}
