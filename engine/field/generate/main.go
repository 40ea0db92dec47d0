// Command generate computes the model that package field embeds and the table
// of delays that package heart builds its network from. Run it from the
// repository's root:
//
//	go run ./engine/field/generate
package main

import (
	"fmt"
	"os"

	"escapement/engine/field/tissue"
)

func main() {
	p := fitted()
	v := buildVentricles(p)
	a := buildAtria(p, v)
	vp := &tissue.Part{Name: "ventricles", Graph: tissue.NewGraph(len(v.x), links(len(v.x), v.edges)), Entries: v.entries()}
	ap := &tissue.Part{Name: "atria", Graph: tissue.NewGraph(len(a.x), links(len(a.x), a.edges)), Entries: a.entries()}
	for _, d := range travels(vp, len(p.fascicles())) {
		fmt.Fprintln(os.Stderr, d)
	}
	for _, d := range travels(ap, 0) {
		fmt.Fprintln(os.Stderr, d)
	}
	fmt.Fprintln(os.Stderr, len(v.x), len(v.tri), len(v.edges), len(a.x), len(a.tri), len(a.edges), volume(v.x, v.tri)/1000)
	if err := os.WriteFile("engine/heart/anatomy_table.go", anatomyTable(p, vp, ap), 0o644); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}
