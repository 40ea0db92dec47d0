// Package engine holds no code of its own, only the rule of who may import whom.
package engine

import (
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// allowed lists, for every package of the module, the packages of the module that
// it may import. Lower ones stand first; siblings do not know each other. A package
// that is not in the table fails the test, and so does an import that is not in its
// row. Tests may import more.
var allowed = map[string][]string{
	"engine/tick":           {},
	"engine/portmath":       {},
	"engine/event":          {"engine/tick"},
	"engine/lead":           {"engine/tick", "engine/event"},
	"engine/heart":          {"engine/tick", "engine/portmath", "engine/event"},
	"engine/pacer":          {"engine/tick", "engine/event"},
	"engine/plan":           {"engine/tick", "engine/event", "engine/heart", "engine/pacer"},
	"engine/plan/link":      {"engine/plan"},
	"engine/nomenclature":   {"engine/plan"},
	"engine/sim":            {"engine/tick", "engine/portmath", "engine/event", "engine/heart", "engine/pacer", "engine/plan"},
	"engine/sim/simtest":    {"engine/event", "engine/plan", "engine/sim", "presets"},
	"engine/handle":         {"engine/tick", "engine/event", "engine/pacer", "engine/plan"},
	"engine/ladder":         {"engine/tick", "engine/event"},
	"engine/field":          {"engine/tick", "engine/portmath", "engine/event", "engine/lead", "engine/field/tissue"},
	"engine/field/tissue":   {"engine/tick", "engine/portmath", "engine/lead"},
	"engine/field/criteria": {"engine/tick", "engine/portmath", "engine/lead", "engine/field/tissue"},
	"engine/field/generate": {"engine/tick", "engine/portmath", "engine/lead", "engine/field/tissue", "engine/field/criteria"},
	"engine/membrane":       {"engine/tick", "engine/portmath", "engine/event", "engine/heart", "engine/lead", "engine/field/tissue"},
	"engine/measure":        {"engine/tick", "engine/portmath", "engine/event", "engine/lead"},
	"engine/contrast":       {"engine/tick", "engine/event", "engine/measure", "engine/plan"},
	"engine/account":        {"engine/tick", "engine/event"},
	"engine/sweep":          {"engine/tick", "engine/event", "engine/pacer", "engine/plan", "engine/sim", "engine/measure"},
	"engine/search":         {"engine/tick", "engine/event", "engine/pacer", "engine/plan", "engine/sim", "engine/measure", "engine/sweep"},
	"engine/scene":          {"engine/tick", "engine/event", "engine/lead", "engine/ladder"},
	"engine/press":          {"engine/scene"},
	"engine/signal":         {"engine/event", "engine/lead", "engine/field", "engine/heart", "engine/membrane", "engine/pacer", "engine/plan", "engine/scene"},
	"engine/study":          {"engine/tick", "engine/event", "engine/plan", "engine/sim"},
	"engine/manoeuvre":      {"engine/tick", "engine/event", "engine/plan", "engine/sim", "engine/measure", "engine/study"},
	"engine/numbers":        {"engine/tick", "engine/event", "engine/pacer", "engine/plan", "engine/measure"},
	"engine/timeline":       {"engine/event", "engine/lead", "engine/plan", "engine/sim", "engine/field", "engine/measure", "engine/contrast", "engine/numbers", "engine/scene", "engine/signal"},
	"engine/report":         {"engine/timeline", "engine/tick", "engine/lead", "engine/plan", "engine/ladder", "engine/contrast", "engine/numbers", "engine/scene"},
	"engine/export/edf":     {"engine/tick"},
	"engine/export": {"engine/timeline", "engine/tick", "engine/event", "engine/lead", "engine/ladder", "engine/measure", "engine/account", "engine/numbers", "engine/scene",
		"engine/export/edf"},
	"presets": {},
	"wasm/live/session": {"engine/timeline", "engine/tick", "engine/event", "engine/lead", "engine/heart", "engine/pacer", "engine/plan", "engine/sim", "engine/ladder",
		"engine/field", "engine/measure", "engine/contrast", "engine/account", "engine/handle", "engine/nomenclature", "engine/numbers", "engine/scene",
		"engine/study", "presets", "engine/sweep", "engine/search", "engine/manoeuvre"},
	"wasm/press/service": {"engine/timeline", "engine/field", "engine/tick", "engine/lead", "engine/plan", "engine/ladder", "engine/numbers", "engine/export", "engine/report",
		"engine/scene", "engine/signal", "engine/press", "presets"},
}

// top are the programs: they wire everything, and nothing imports them.
var top = []string{"site/stamp", "engine/cmd/escapement", "wasm/live", "wasm/press"}

const module = "escapement/"

func TestImportsFollowTheTable(t *testing.T) {
	root := ".."
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() && (d.Name() == "node_modules" || d.Name() == "dist" || strings.HasPrefix(d.Name(), ".") && path != root) {
			if d != nil && d.IsDir() && err == nil {
				return fs.SkipDir
			}
			return err
		}
		if !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
			return nil
		}
		rel, err := filepath.Rel(root, filepath.Dir(path))
		if err != nil {
			return err
		}
		check(t, filepath.ToSlash(rel), path)
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
}

func check(t *testing.T, pkg, path string) {
	row, known := allowed[pkg]
	if !known && !slices.Contains(top, pkg) {
		t.Errorf("%s: package %s is not in the table of imports", path, pkg)
		return
	}
	f, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ImportsOnly)
	if err != nil {
		t.Error(err)
		return
	}
	for _, im := range f.Imports {
		name, err := strconv.Unquote(im.Path.Value)
		if err != nil {
			t.Error(err)
			continue
		}
		if name == "syscall/js" && !strings.HasPrefix(pkg, "wasm/") {
			t.Errorf("%s imports syscall/js, which belongs under wasm/", path)
		}
		if own, ours := strings.CutPrefix(name, module); ours {
			if slices.Contains(top, own) {
				t.Errorf("%s imports %s, a program", path, own)
			} else if known && !slices.Contains(row, own) {
				t.Errorf("%s imports %s; allowed for %s: %s", path, own, pkg, strings.Join(row, ", "))
			}
		}
	}
}

// The page's first load must stay small: the drawing library is for prints.
func TestTheWorkbenchDoesNotCarryTheDrawingLibrary(t *testing.T) {
	files, err := filepath.Glob("../wasm/live/*.go")
	if err != nil || len(files) == 0 {
		t.Fatalf("no files under wasm/live: %v", err)
	}
	for _, path := range files {
		f, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ImportsOnly)
		if err != nil {
			t.Fatal(err)
		}
		for _, im := range f.Imports {
			if strings.Contains(im.Path.Value, "engine/press") || strings.Contains(im.Path.Value, "tdewolff") {
				t.Errorf("%s imports %s", path, im.Path.Value)
			}
		}
	}
}
