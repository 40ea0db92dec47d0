package session

import (
	"math"
	"testing"
)

type sheetOf struct {
	Axis struct {
		X0     float64 `json:"x0"`
		MMPerS float64 `json:"mm_per_s"`
		T0     float64 `json:"t0_us"`
	} `json:"axis"`
	Width  float64 `json:"width"`
	Height float64 `json:"height"`
	Lanes  []struct {
		Name   string
		Y0, Y1 float64
	}
	Handles handles `json:"handles"`
	Tiers   []tier  `json:"tiers"`
}

func TestHandlesStandOnTheSheetWhereTheirMarksAre(t *testing.T) {
	for _, c := range []struct {
		name, preset string
		ladder       string
		paths        []string // that must be among them
	}{
		{"a tracked rhythm", "dual-one-to-one-to-140", "full", []string{"pacemaker.pvarp_ms", "pacemaker.sensed_av_ms"}},
		{"the same, plain ladder", "dual-one-to-one-to-140", "plain", []string{"pacemaker.pvarp_ms"}},
		{"a heart alone, every level", "normal", "full", []string{"heart.sinus.rate_bpm", "heart.sinus.first_ms"}},
		{"a heart alone, plain", "normal", "plain", []string{"heart.sinus.rate_bpm"}},
		{"hysteresis", "vvi-hysteresis", "plain", []string{"pacemaker.hysteresis.rate_bpm", "pacemaker.ventricular_refractory_ms"}},
		{"a premature beat", "pvc-full-pause", "plain", []string{"interventions[0].at_ms"}},
	} {
		s := New()
		v := usual()
		v["ladder"], v["mm_per_s"] = c.ladder, 14
		reply[computeReply](t, s, "compute", asked{Plan: presetPlan(t, c.preset), View: v})
		d, _ := reply[sheetOf](t, s, "layout", asked{View: v})
		seen := map[string]bool{}
		for _, h := range d.Handles.List {
			path := d.Handles.Values[int(h[1])].Path
			seen[path] = true
			x := d.Axis.X0 + (h[2]-d.Axis.T0/1000)/1000*d.Axis.MMPerS
			if x < d.Axis.X0-0.01 || x > d.Width || h[7] > h[8] || h[8] > d.Height || h[7] <= 0 || h[5] == 0 && h[3] > h[2] || math.Abs(h[4]) < 0.1 {
				t.Errorf("%s: %s at %v", c.name, path, h)
			}
		}
		for _, p := range c.paths {
			if !seen[p] {
				t.Errorf("%s: nothing moves %s (of %v)", c.name, p, seen)
			}
		}
		if len(d.Tiers) < 3 || d.Tiers[0].Y0 >= d.Tiers[0].Y1 {
			t.Errorf("%s: tiers %v", c.name, d.Tiers)
		}
	}
}
