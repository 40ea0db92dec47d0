// Command generate computes the model that package field embeds and the table
// of delays that package heart builds its network from. Run it from the
// repository's root:
//
//	go run ./engine/field/generate
//
// It builds the shape of the ventricles and atria, the net of travel times, the
// torso as a volume conductor with two cavities of blood, and what each bit of
// muscle surface contributes to each lead. Everything that takes mathematics
// beyond adding and multiplying happens here, once: the result is the same file
// on every machine that runs the program later.
package main

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"

	"escapement/engine/field/criteria"
	"escapement/engine/field/tissue"
)

func main() {
	root := flag.String("root", ".", "the repository's root")
	fit := flag.String("fit", "", "search for better parameters, print them and write nothing: atria, ventricles")
	seed := flag.Uint64("seed", 1, "of the search")
	tries := flag.Int("tries", 2000, "of the search")
	extra := flag.Bool("extra", false, "give the search for ventricles more terminals")
	flag.Parse()
	var err error
	switch *fit {
	case "":
		err = run(*root)
	case "atria":
		_, err = fitAtria(first(), *seed, *tries)
	case "ventricles":
		p := first()
		p.Atria = fitted().Atria
		err = fitVentricles(p, *seed, *tries, *extra)
	default:
		err = fmt.Errorf("there is no search for %q; there are atria and ventricles", *fit)
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "generate:", err)
		os.Exit(1)
	}
}

// limits are the thresholds the field marks its waves by.
var limits = criteria.Limits{Ventricles: tissue.VentricularLimits, Atria: tissue.AtrialLimits}

func run(root string) error {
	m, err := build(fitted())
	if err != nil {
		return err
	}
	for _, f := range []struct {
		path string
		data []byte
	}{
		{"engine/field/muscle.bin", tissue.Encode(m.ventricles, m.atria)},
		{"engine/field/electrodes.bin", tissue.EncodeBipoles(bipoles(m))},
		{"engine/heart/anatomy_table.go", anatomyTable(m.p, m.ventricles, m.atria)},
	} {
		if err := os.WriteFile(filepath.Join(root, f.path), f.data, 0o644); err != nil {
			return err
		}
		fmt.Printf("%s: %d bytes\n", f.path, len(f.data))
	}
	return nil
}
