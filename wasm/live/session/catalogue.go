package session

import (
	"encoding/json"

	"escapement/engine/field"
	"escapement/engine/heart"
	"escapement/engine/numbers"
	"escapement/engine/pacer"
	"escapement/engine/plan"
	"escapement/engine/scene"
	"escapement/presets"
)

type catalogueReply struct {
	Fields   []plan.Field      `json:"fields"`
	Presets  []preset          `json:"presets"`
	Sites    []site            `json:"sites"`
	Lanes    []site            `json:"lanes"`    // electrograms and action potentials that a view may show
	Outcomes []plan.Outcome    `json:"outcomes"` // of a run, which a sweep may ask for
	Meanings []numbers.Meaning `json:"meanings"` // of sums, intervals, differences and findings
	Modes    []string          `json:"modes"`    // of a device, without letters IV and V
	Styles   struct {
		Light json.RawMessage `json:"light"`
		Dark  json.RawMessage `json:"dark"`
	} `json:"styles"`
	Margins struct { // what a scene needs beside its time axis
		Plain float64 `json:"plain"`
		Full  float64 `json:"full"`
	} `json:"margins_mm"`
}

type preset struct {
	presets.Entry
	Plan json.RawMessage `json:"plan"`
}

type site struct {
	Name  string `json:"name"`
	Label string `json:"label"`
}

func catalogue() *catalogueReply {
	r := &catalogueReply{Fields: plan.Catalogue(), Outcomes: plan.Outcomes(), Modes: pacer.Modes, Meanings: numbers.Meanings()}
	r.Margins.Plain, r.Margins.Full = marginPlain+edge, marginFull+edge
	for _, e := range presets.List() {
		file, ok := presets.Read(e.Name)
		if !ok {
			panic("session: preset " + e.Name + " is listed but not there")
		}
		r.Presets = append(r.Presets, preset{e, file})
	}
	r.Sites = sites()
	for _, e := range field.Electrodes() {
		r.Lanes = append(r.Lanes, site{"egm:" + e.Name, e.Label})
	}
	r.Lanes = append(r.Lanes, site{"egm:A", "the device's atrial lead"}, site{"egm:V", "the device's ventricular lead"})
	for _, s := range r.Sites {
		r.Lanes = append(r.Lanes, site{"membrane:" + s.Name, s.Label})
	}
	r.Styles.Light = scene.StylesJSON(false)
	r.Styles.Dark = scene.StylesJSON(true)
	return r
}

// sites are those that a focus or a stimulus may be put on.
func sites() []site {
	var out []site
	for _, name := range heart.SiteNames() {
		out = append(out, site{name, heart.SiteLabel(name)})
	}
	return out
}
