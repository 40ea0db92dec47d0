package plan

import (
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"escapement/engine/pacer"
)

// judge reads a raw JSON value for a field; allowed is empty where it fits and
// says what would where it does not.
func judge(f *Field, v any) (value Value, allowed string) {
	if v == nil {
		if f.Nullable {
			return Value{Null: true}, ""
		}
		return value, f.allowed()
	}
	switch f.Kind {
	case Number:
		x, ok := number(v)
		if !ok || x < f.Min || x > f.Max || f.Whole && x != math.Trunc(x) {
			return value, f.allowed()
		}
		return Value{Number: x}, ""
	case Switch:
		on, ok := v.(bool)
		if !ok {
			return value, f.allowed()
		}
		return Value{On: on}, ""
	case Choice:
		s, ok := v.(string)
		if !ok || f.Choices != nil && !slices.Contains(f.Choices, s) {
			return value, f.allowed()
		}
		return Value{Text: s}, ""
	case Pattern:
		s, ok := v.(string)
		if _, good := parseDrop(s); !ok || !good {
			return value, f.allowed()
		}
		return Value{Text: s}, ""
	case ModeCode:
		s, ok := v.(string)
		if !ok {
			return value, f.allowed()
		}
		if _, err := pacer.ParseMode(s); err != nil {
			return value, strings.TrimPrefix(err.Error(), fmt.Sprintf("mode %q: ", s))
		}
		return Value{Text: s}, ""
	case List:
		return list(f, v)
	case Any:
		if s, ok := v.(string); ok && len(s) < 100 {
			return Value{Text: s}, ""
		}
		if x, ok := number(v); ok {
			return Value{Number: x}, ""
		}
	}
	return value, f.allowed()
}

func list(f *Field, v any) (value Value, allowed string) {
	raw, ok := v.([]any)
	if !ok || len(raw) > 20 {
		return value, f.allowed()
	}
	for _, v := range raw {
		x, ok := number(v)
		if !ok || x < f.Min || x > f.Max {
			return value, f.allowed()
		}
		value.List = append(value.List, x)
	}
	return value, ""
}

func number(v any) (float64, bool) {
	switch n := v.(type) {
	case json.Number:
		x, err := strconv.ParseFloat(string(n), 64)
		return x, err == nil && !math.IsInf(x, 0) && !math.IsNaN(x)
	case float64:
		return n, !math.IsInf(n, 0) && !math.IsNaN(n)
	}
	return 0, false
}

// allowed says in words what a field takes.
func (f *Field) allowed() string {
	var s string
	switch f.Kind {
	case Number:
		s = fmt.Sprintf("a number from %s to %s", plainNumber(f.Min), plainNumber(f.Max))
		if f.Whole {
			s = "a whole" + s[1:]
		}
		if f.Unit != "" {
			s += " " + f.Unit
		}
	case Switch:
		s = "true or false"
	case Choice:
		s = "one of " + strings.Join(f.Choices, ", ")
		if f.Choices == nil {
			s = "the path of a number in the plan, such as heart.sinus.rate_bpm"
		}
	case ModeCode:
		s = "a pacing mode: " + strings.Join(pacer.Modes, ", ") + ", with R and V where they apply"
	case Pattern:
		s = `"3:2" (two of three conducted), "3:2+1" or "10%"`
	case List:
		s = fmt.Sprintf("up to 20 numbers from %s to %s %s", plainNumber(f.Min), plainNumber(f.Max), f.Unit)
	default:
		s = "a number or a short text"
	}
	if f.Nullable {
		s += ", or null"
		if f.Null != "" {
			s += " (" + f.Null + ")"
		}
	}
	return s
}

func plainNumber(x float64) string { return strconv.FormatFloat(x, 'f', -1, 64) }

// show writes a raw value as it stands in the file.
func show(v any) string {
	if v == nil {
		return "null"
	}
	b, err := json.Marshal(v)
	if err != nil {
		return fmt.Sprint(v)
	}
	return string(b)
}
