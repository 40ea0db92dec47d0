// Package presets holds plan files, one for each scenario, built into the program.
// Every one is an invented heart; its note says what to look for.
package presets

import (
	"embed"
	"encoding/json"
	"path"
	"sort"
	"strings"
)

//go:embed *.json
var files embed.FS

// Entry is one preset: its name (the file's), and the title and note of its plan.
type Entry struct {
	Name  string `json:"name"`
	Title string `json:"title"`
	Note  string `json:"note"`
}

// List gives the presets in the order of order.json: from normal to block, escape,
// premature beats and bundle branch block.
func List() []Entry {
	var names []string
	if err := json.Unmarshal(mustRead("order.json"), &names); err != nil {
		panic("presets: order.json: " + err.Error())
	}
	out := make([]Entry, len(names))
	for i, n := range names {
		out[i].Name = n
		if err := json.Unmarshal(mustRead(n+".json"), &out[i]); err != nil {
			panic("presets: " + n + ": " + err.Error())
		}
	}
	return out
}

// Read gives a preset's plan file.
func Read(name string) ([]byte, bool) {
	if name == "order" || strings.ContainsAny(name, `/\.`) {
		return nil, false
	}
	b, err := files.ReadFile(name + ".json")
	return b, err == nil
}

// Names lists the files themselves, sorted.
func Names() []string {
	entries, err := files.ReadDir(".")
	if err != nil {
		panic("presets: " + err.Error())
	}
	var names []string
	for _, e := range entries {
		if n := strings.TrimSuffix(e.Name(), path.Ext(e.Name())); n != "order" {
			names = append(names, n)
		}
	}
	sort.Strings(names)
	return names
}

func mustRead(name string) []byte {
	b, err := files.ReadFile(name)
	if err != nil {
		panic("presets: " + err.Error())
	}
	return b
}
