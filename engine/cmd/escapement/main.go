// Command escapement computes conduction timelines: plan in, events, intervals
// and drawings out. Output for programs is JSON on standard output; errors go to
// standard error. It exits with 2 for a bad plan or bad usage, 1 for a failure.
package main

import (
	"bufio"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"

	"escapement/engine/event"
	"escapement/engine/field"
	"escapement/engine/measure"
	"escapement/engine/plan"
	"escapement/engine/plan/link"
	"escapement/engine/sim"
	"escapement/presets"
)

const usage = `escapement: conduction timelines of the whole heart

  escapement run PLAN           the events, one JSON object a line
  escapement measure PLAN       beats with their intervals, summary and findings, as JSON
  escapement draw PLAN -o F     the sheet as a drawing: F.svg, F.pdf or F.png
  escapement report PLAN -o F   the report on paper, F.pdf: strip, intervals, findings, settings;
                                with -before PLAN, both strips and what differs
  escapement export PLAN -o F   the strip for other programs: F.edf (EDF+: leads with annotations),
                                F.csv (events) or F.json (plan, events, measures, findings)
  escapement settings PLAN      the device's settings as a table in open nomenclature, as CSV;
                                with -read TABLE, the plan with the device of a table
  escapement sweep PLAN ...     a grid of runs and its outcomes, or the boundaries between behaviours;
                                escapement sweep PLAN -h lists the flags
  escapement search PLAN ...    the settings that reach the plan's goals, or which goals conflict;
                                escapement search PLAN -h lists the flags
  escapement presets            names, titles and notes of the built-in plans, as JSON
  escapement link PLAN          the plan as the end of a web address: #plan=...
  escapement serve              the built site on a loopback port, and under /press/
                                the print service: POST /press/strip.pdf {"plan":{...}}

PLAN is a file, "-" for standard input, the name of a preset, or a link with a plan in it.
Planning and teaching aid, not a medical device; not for treating a patient.
`

func main() {
	err := command(os.Args[1:], os.Stdin, os.Stdout)
	var ds plan.Diagnoses
	var bad *usageError
	var over *sim.Overrun
	switch {
	case err == nil:
	case errors.Is(err, flag.ErrHelp):
		fmt.Print(usage)
	case errors.As(err, &ds), errors.As(err, &bad), errors.As(err, &over):
		fmt.Fprintln(os.Stderr, "escapement:", err)
		os.Exit(2)
	default:
		fmt.Fprintln(os.Stderr, "escapement:", err)
		os.Exit(1)
	}
}

type usageError struct{ text string }

func (u *usageError) Error() string { return u.text + "\n\n" + usage }

func command(args []string, in io.Reader, out io.Writer) error {
	if len(args) == 0 {
		return &usageError{"no command given"}
	}
	name, args := args[0], args[1:]
	switch name {
	case "run", "measure":
		if len(args) != 1 {
			return &usageError{fmt.Sprintf("%s takes one plan, found %d arguments", name, len(args))}
		}
		log, err := run(args[0], in)
		if err != nil {
			return err
		}
		if name == "run" {
			return log.WriteJSON(out)
		}
		return writeJSON(out, measure.Of(log, field.Record(log)))
	case "draw":
		return draw(args, in)
	case "report":
		return onPaper(args, in)
	case "export":
		return exporting(args, in)
	case "settings":
		return settings(args, in, out, os.Stderr)
	case "link":
		return writeLink(args, in, out)
	case "sweep":
		return runSweep(args, in, out, os.Stderr)
	case "search":
		return runSearch(args, in, out, os.Stderr)
	case "presets":
		return writeJSON(out, presets.List())
	case "serve":
		return serve(args)
	case "help", "-h", "--help":
		return flag.ErrHelp
	}
	return &usageError{fmt.Sprintf("%q is not a command", name)}
}

// run plays the plan that an argument names.
func run(arg string, in io.Reader) (*event.Log, error) {
	p, err := read(arg, in)
	if err != nil {
		return nil, err
	}
	return sim.Run(p)
}

// writeLink prints the fragment that carries a plan to the page.
func writeLink(args []string, in io.Reader, out io.Writer) error {
	if len(args) != 1 {
		return &usageError{fmt.Sprintf("link takes one plan, found %d arguments", len(args))}
	}
	p, err := read(args[0], in)
	if err != nil {
		return err
	}
	fragment, err := link.Encode(p)
	if err != nil {
		return err
	}
	_, err = fmt.Fprintln(out, fragment)
	return err
}

// read finds a plan: standard input, a link, a preset, or a file.
func read(arg string, in io.Reader) (*plan.Plan, error) {
	var data []byte
	var err error
	if link.Is(arg) {
		return link.Decode(arg)
	}
	if arg == "-" {
		data, err = io.ReadAll(io.LimitReader(in, plan.MaxBytes+1))
	} else if b, ok := presets.Read(arg); ok {
		data = b
	} else if data, err = os.ReadFile(arg); errors.Is(err, os.ErrNotExist) {
		return nil, &usageError{fmt.Sprintf("%q is neither a file nor a preset (see: escapement presets)", arg)}
	}
	if err != nil {
		return nil, err
	}
	return plan.Decode(data)
}

func writeJSON(out io.Writer, v any) error {
	b := bufio.NewWriter(out)
	enc := json.NewEncoder(b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", " ")
	if err := enc.Encode(v); err != nil {
		return err
	}
	return b.Flush()
}
