package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"strings"

	"escapement/engine/nomenclature"
	"escapement/engine/plan"
)

// settings writes the table of a plan's device, or reads one into a plan.
//
//	escapement settings PLAN              the table, as CSV
//	escapement settings PLAN -read TABLE  the plan with the device of the table, as JSON
//
// What the table does not state and rows that are not known go to standard error.
func settings(args []string, in io.Reader, out, notes io.Writer) error {
	reading := len(args) == 3 && args[1] == "-read"
	if len(args) != 1 && !reading {
		return &usageError{"settings takes a plan, and perhaps -read TABLE"}
	}
	p, err := read(args[0], in)
	if err != nil {
		return err
	}
	if !reading {
		return nomenclature.Write(out, p)
	}
	f, err := os.Open(args[2])
	if errors.Is(err, os.ErrNotExist) {
		return &usageError{fmt.Sprintf("%q is no file", args[2])}
	}
	if err != nil {
		return err
	}
	defer f.Close()
	missing, unknown, err := nomenclature.Read(f, p)
	if err != nil {
		return &usageError{err.Error()}
	}
	if len(unknown) > 0 {
		fmt.Fprintf(notes, "rows that are not known: %s\n", strings.Join(unknown, "; "))
	}
	fmt.Fprintf(notes, "not stated, %d settings: %s\n", len(missing), strings.Join(missing, " "))
	q, err := plan.Decode(p.Encode())
	if err != nil {
		return err
	}
	_, err = out.Write(q.Encode())
	return err
}
