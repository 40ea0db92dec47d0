package main

import (
	"flag"
	"fmt"
	"strings"

	"escapement/engine/scene"
	"escapement/engine/signal"
)

// laneFlags say which lanes a drawing has.
type laneFlags struct {
	names, form string
	egmGain     float64
}

func (l *laneFlags) define(fs *flag.FlagSet) {
	fs.StringVar(&l.names, "lanes", "", "lanes from top to bottom, with commas, in place of -leads: lead:II, egm:HISd, egm:V, membrane:his, axis, ladder, device")
	fs.StringVar(&l.form, "paper-form", "", "the twelve leads as on paper, above the other lanes: 3x4, 6x2 or 12x1, each also with +rhythm")
	fs.Float64Var(&l.egmGain, "egm-gain", 10, "mm a millivolt, for electrograms")
}

// read gives the lanes, nil for the usual ones, and the form, without columns for none.
func (l *laneFlags) read(command string) ([]string, scene.Form12, error) {
	var form scene.Form12
	if l.form != "" {
		var ok bool
		if form, ok = scene.ParseForm12(l.form); !ok {
			return nil, form, &usageError{fmt.Sprintf("%s: %q is not a form of paper: 3x4, 6x2, 12x1, each also with +rhythm", command, l.form)}
		}
	}
	if l.names == "" {
		return nil, form, nil
	}
	lanes := strings.Split(l.names, ",")
	for _, name := range lanes {
		if !signal.Named(name) {
			return nil, form, &usageError{fmt.Sprintf("%s: %q is not a lane: lead:II, egm:HISd, egm:A, membrane:his and the like, axis, ladder, device", command, name)}
		}
	}
	return lanes, form, nil
}
