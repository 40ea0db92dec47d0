package main

import (
	"bytes"
	"encoding/json"
	"encoding/xml"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"escapement/engine/plan"
	"escapement/presets"
)

func call(t *testing.T, in string, args ...string) (string, error) {
	t.Helper()
	var out bytes.Buffer
	err := command(args, strings.NewReader(in), &out)
	return out.String(), err
}

func TestRunPrintsOneEventALine(t *testing.T) {
	byName, err := call(t, "", "run", "normal")
	if err != nil {
		t.Fatal(err)
	}
	b, _ := presets.Read("normal")
	piped, err := call(t, string(b), "run", "-")
	if err != nil || piped != byName {
		t.Errorf("the preset by name and through a pipe differ (%v)", err)
	}
	lines := strings.Split(strings.TrimSpace(byName), "\n")
	for i, line := range lines {
		var e struct {
			ID    int    `json:"id"`
			T     int64  `json:"t_us"`
			Kind  string `json:"kind"`
			Cause *int   `json:"cause"`
			Rule  string `json:"rule"`
		}
		if err := json.Unmarshal([]byte(line), &e); err != nil || e.ID != i+1 || e.Kind == "" || e.Cause == nil || e.Rule == "" {
			t.Fatalf("line %d: %s (%v)", i+1, line, err)
		}
	}
}

func TestAPlanGoesThroughALinkAndBack(t *testing.T) {
	fragment, err := call(t, "", "link", "normal")
	if err != nil || !strings.HasPrefix(fragment, "#plan=") {
		t.Fatalf("%q, %v", fragment, err)
	}
	byLink, err := call(t, "", "run", "https://example.org/"+strings.TrimSpace(fragment))
	if err != nil {
		t.Fatal(err)
	}
	if byName, _ := call(t, "", "run", "normal"); byName != byLink {
		t.Error("the preset by name and by its link differ")
	}
	var ds plan.Diagnoses
	if _, err := call(t, "", "run", strings.TrimSpace(fragment)[:20]); !errors.As(err, &ds) {
		t.Errorf("a link that is cut off: %v, want a diagnosis", err)
	}
}

// The names of the summary are a contract with programs.
func TestMeasureHoldsItsContract(t *testing.T) {
	out, err := call(t, "", "measure", "normal")
	if err != nil {
		t.Fatal(err)
	}
	var m struct {
		Beats    []map[string]any `json:"beats"`
		Summary  map[string]any   `json:"summary"`
		Findings []map[string]any `json:"findings"`
	}
	if err := json.Unmarshal([]byte(out), &m); err != nil {
		t.Fatal(err)
	}
	for _, k := range []string{"p_rate_bpm", "v_rate_bpm", "pr_ms", "qrs_ms", "qt_ms", "qrs_axis_deg", "p_axis_deg", "ah_ms", "hv_ms", "p_count", "qrs_count", "conducted_count"} {
		if v, ok := m.Summary[k]; !ok || v == nil {
			t.Errorf("the summary has no %s", k)
		}
	}
	for _, b := range m.Beats {
		if _, ok := b["t_us"]; !ok {
			t.Errorf("a beat without t_us: %v", b)
		}
	}
	if len(m.Findings) == 0 || m.Findings[0]["slug"] != "sinus_rhythm" || m.Findings[0]["text"] == "" || m.Findings[0]["evidence"] == nil {
		t.Errorf("findings: %v", m.Findings)
	}
	// PR 120-200 and QRS under 120: common practice.
	if pr := m.Summary["pr_ms"].(float64); pr < 120 || pr > 200 {
		t.Errorf("PR %v ms", pr)
	}
	if qrs := m.Summary["qrs_ms"].(float64); qrs >= 120 || qrs < 60 {
		t.Errorf("QRS %v ms", qrs)
	}
}

func TestDrawWritesAnSVGAndNothingOnError(t *testing.T) {
	dir := t.TempDir()
	name := filepath.Join(dir, "sheet.svg")
	if _, err := call(t, "", "draw", "wenckebach-4-3", "-o", name, "-leads", "II"); err != nil {
		t.Fatal(err)
	}
	b, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	for d := xml.NewDecoder(bytes.NewReader(b)); ; {
		if _, err := d.Token(); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatalf("not XML: %v", err)
		}
	}
	if !strings.Contains(string(b), "Not a medical device") {
		t.Error("the caution is missing")
	}
	for _, more := range [][]string{{"-lanes", "egm:HISd,lead:II,axis"}, {"-paper-form", "6x2"}} {
		if _, err := call(t, "", append([]string{"draw", "wenckebach-4-3", "-o", name}, more...)...); err != nil {
			t.Fatal(err)
		}
		if after, err := os.ReadFile(name); err != nil || bytes.Equal(b, after) {
			t.Errorf("%v changes nothing (%v)", more, err)
		}
	}
	if _, err := call(t, "", "draw", "normal", "-o", filepath.Join(dir, "x.svg"), "-leads", "V9"); err == nil {
		t.Error("lead V9 was drawn")
	}
	left, err := os.ReadDir(dir)
	if err != nil || len(left) != 1 {
		t.Errorf("%d files left, want the one drawing (%v)", len(left), err)
	}
}

func TestPresetsAreListed(t *testing.T) {
	out, err := call(t, "", "presets")
	if err != nil {
		t.Fatal(err)
	}
	var list []presets.Entry
	if err := json.Unmarshal([]byte(out), &list); err != nil || len(list) < 20 {
		t.Fatalf("%d presets (%v)", len(list), err)
	}
	for _, e := range list {
		if e.Title == "" || e.Note == "" {
			t.Errorf("%s has no title or note", e.Name)
		}
	}
	if len(presets.Names()) != len(list) {
		t.Errorf("%d files, %d in the order: one is missing from order.json", len(presets.Names()), len(list))
	}
}

func TestSettingsAreWrittenAndReadAsATable(t *testing.T) {
	const with = `{"format":"escapement-plan/1","pacemaker":{"mode":"VVI","lower_rate_bpm":70}}`
	table, err := call(t, with, "settings", "-")
	if err != nil {
		t.Fatal(err)
	}
	name := filepath.Join(t.TempDir(), "table.csv")
	if err := os.WriteFile(name, []byte(table), 0o600); err != nil {
		t.Fatal(err)
	}
	got, err := call(t, `{"format":"escapement-plan/1"}`, "settings", "-", "-read", name)
	if err != nil || !strings.Contains(got, `"mode": "VVI"`) || strings.Contains(got, "pvarp") {
		t.Errorf("read back: %s (%v)", got, err)
	}
}

func TestBadUseIsExplained(t *testing.T) {
	for _, c := range []struct {
		name string
		args []string
		in   string
		want string
	}{
		{"no command", nil, "", "no command given"},
		{"unknown command", []string{"play"}, "", `"play" is not a command`},
		{"no such plan", []string{"run", "nothing-there"}, "", `"nothing-there" is neither a file nor a preset`},
		{"two plans", []string{"run", "a", "b"}, "", "run takes one plan, found 2 arguments"},
		{"bad plan", []string{"measure", "-"}, `{"format":"escapement-plan/1","heart":{"sinus":{"rate_bpm":0}}}`, "heart.sinus.rate_bpm: 0; allowed: a number from 10 to 220 /min"},
		{"no file", []string{"draw", "normal"}, "", "draw takes a plan and then -o FILE"},
		{"ending", []string{"draw", "normal", "-o", "x.gif"}, "", "it can be .svg, .pdf or .png"},
		{"no such lane", []string{"draw", "normal", "-o", "x.svg", "-lanes", "lead:II,egm:moon"}, "", "\"egm:moon\" is not a lane"},
		{"no such form", []string{"draw", "normal", "-o", "x.svg", "-paper-form", "4x3"}, "", "\"4x3\" is not a form of paper"},
		{"window", []string{"draw", "normal", "-o", "x.svg", "-from", "9000", "-to", "8000"}, "", "does not lie in the strip"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := call(t, c.in, c.args...)
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Fatalf("got  %v\nwant %s", err, c.want)
			}
			var bad *usageError
			var ds plan.Diagnoses
			if !errors.As(err, &bad) && !errors.As(err, &ds) {
				t.Errorf("%T would exit with 1, want 2", err)
			}
		})
	}
}
