package event

import (
	"bufio"
	"fmt"
	"io"
	"strconv"
	"strings"

	"escapement/engine/tick"
)

// The text form is for tests and for reading: a header line for every site and
// path, then one event a line, fields in a fixed order, absent ones left out.
//
//	log span=12000000
//	site sinus sinus
//	path sinoatrial sinus sinus right_atrium
//	1 600000 discharge phase4 from=0 site=sinus
//	2 600000 activate fired from=1 site=sinus until=900000
//	3 660000 activate conducted from=2 site=right_atrium path=sinoatrial dir=down until=880000
//
// Times are microseconds. A site line is name and tissue; a path line is name,
// tissue and the sites it joins. Labels are not kept.

// Text writes the log in its text form.
func (l *Log) Text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "log span=%d\n", l.Span)
	for i := range l.Sites {
		fmt.Fprintf(&b, "site %s %s\n", l.Sites[i].Name, l.Sites[i].Tissue)
	}
	for i := range l.Paths {
		p := &l.Paths[i]
		fmt.Fprintf(&b, "path %s %s %s %s\n", p.Name, p.Tissue, l.Sites[p.From].Name, l.Sites[p.To].Name)
	}
	for i := range l.Events {
		l.line(&b, &l.Events[i])
	}
	return b.String()
}

func (l *Log) line(b *strings.Builder, e *Event) {
	fmt.Fprintf(b, "%d %d %s %s from=%d", e.ID, e.T, e.Kind, e.Rule, e.Cause)
	if e.Site >= 0 {
		fmt.Fprintf(b, " site=%s", l.Sites[e.Site].Name)
	}
	if e.Path >= 0 {
		fmt.Fprintf(b, " path=%s dir=%s", l.Paths[e.Path].Name, e.Dir)
	}
	for _, f := range []struct {
		name  string
		value int64
	}{{"depth", int64(e.Depth)}, {"recovery", int64(e.Recovery)}, {"needed", int64(e.Needed)}, {"until", int64(e.Until)}} {
		if f.value != 0 {
			fmt.Fprintf(b, " %s=%d", f.name, f.value)
		}
	}
	if e.Captured {
		b.WriteString(" captured=1")
	}
	if e.Channel != 0 {
		fmt.Fprintf(b, " channel=%c", e.Channel)
	}
	if e.Use != 0 {
		fmt.Fprintf(b, " use=%s", e.Use)
	}
	if e.Outcome != 0 {
		fmt.Fprintf(b, " outcome=%s", e.Outcome)
	}
	if e.By != 0 {
		fmt.Fprintf(b, " by=%d", e.By)
	}
	for _, f := range [...]struct{ name, value string }{{"field", e.Field}, {"to", e.To}, {"why", e.Why}} {
		if f.value != "" {
			fmt.Fprintf(b, " %s=%q", f.name, f.value)
		}
	}
	b.WriteByte('\n')
}

// Parse reads the text form. Its errors name the line, what was found and what
// is allowed. It does not judge the log: see [Validate].
func Parse(r io.Reader) (*Log, error) {
	l := &Log{}
	sc := bufio.NewScanner(r)
	sc.Buffer(nil, 1<<20)
	for n := 1; sc.Scan(); n++ {
		line := strings.TrimSpace(sc.Text())
		if line == "" || strings.HasPrefix(line, "#") {
			continue
		}
		if err := l.parseLine(line); err != nil {
			return nil, fmt.Errorf("line %d: %w", n, err)
		}
	}
	return l, sc.Err()
}

func (l *Log) parseLine(line string) error {
	w, err := words(line)
	if err != nil {
		return err
	}
	switch {
	case w[0] == "log" && len(w) == 2 && strings.HasPrefix(w[1], "span="):
		v, err := strconv.ParseInt(w[1][len("span="):], 10, 64)
		l.Span = tick.Time(v)
		return err
	case w[0] == "site" && len(w) == 3:
		t := index(tissueNames[:], w[2])
		if t == 0 {
			return fmt.Errorf("tissue %q is not one of %s", w[2], strings.Join(tissueNames[1:], ", "))
		}
		if len(l.Sites) == 1<<14 {
			return fmt.Errorf("more than %d sites", 1<<14)
		}
		l.Sites = append(l.Sites, Site{Name: w[1], Label: w[1], Tissue: Tissue(t)})
		return nil
	case w[0] == "path" && len(w) == 5:
		t, from, to := index(tissueNames[:], w[2]), l.Site(w[3]), l.Site(w[4])
		if t == 0 || from < 0 || to < 0 {
			return fmt.Errorf("path %q: want a tissue and two sites given above, found %q", w[1], w[2:])
		}
		if len(l.Paths) == 1<<14 {
			return fmt.Errorf("more than %d paths", 1<<14)
		}
		l.Paths = append(l.Paths, Path{Name: w[1], Label: w[1], Tissue: Tissue(t), From: from, To: to})
		return nil
	case len(w) >= 4:
		return l.parseEvent(w)
	}
	return fmt.Errorf("%q is neither a log, site or path line nor an event", line)
}

func (l *Log) parseEvent(w []string) error {
	id, err := strconv.ParseInt(w[0], 10, 32)
	if err != nil {
		return fmt.Errorf("event number %q: %w", w[0], err)
	}
	t, err := strconv.ParseInt(w[1], 10, 64)
	if err != nil {
		return fmt.Errorf("event %d: time %q: %w", id, w[1], err)
	}
	e := Event{ID: ID(id), T: tick.Time(t), Kind: Kind(index(kindNames[:], w[2])), Rule: Rule(index(ruleNames[:], w[3])), Site: None, Path: None}
	if e.Kind == 0 || e.Rule == 0 {
		return fmt.Errorf("event %d: kind %q or rule %q is not known", id, w[2], w[3])
	}
	for _, f := range w[4:] {
		k, v, ok := strings.Cut(f, "=")
		if !ok || !l.setField(&e, k, v) {
			return fmt.Errorf("event %d: field %q is not understood", id, f)
		}
	}
	if (e.Path >= 0) != (e.Dir != 0) {
		return fmt.Errorf("event %d: path and dir come together", id)
	}
	l.Events = append(l.Events, e)
	return nil
}

func (l *Log) setField(e *Event, k, v string) bool {
	switch k {
	case "site":
		e.Site = l.Site(v)
		return e.Site >= 0
	case "path":
		e.Path = l.Path(v)
		return e.Path >= 0
	case "dir":
		e.Dir = Dir(index(dirNames[:], v))
		return e.Dir != 0
	case "field":
		e.Field = v
		return v != ""
	case "to":
		e.To = v
		return v != ""
	case "why":
		e.Why = v
		return v != ""
	case "use":
		e.Use = Use(index(useNames[:], v))
		return e.Use != 0
	case "outcome":
		e.Outcome = Outcome(index(outcomeNames[:], v))
		return e.Outcome != 0
	case "channel":
		e.Channel = v[0]
		return v == "A" || v == "V"
	}
	n, err := strconv.ParseInt(v, 10, 64)
	if err != nil {
		return false
	}
	switch k {
	case "from":
		e.Cause = ID(n)
		return n >= 0 && n < 1<<31
	case "depth":
		e.Depth = uint16(n)
		return n > 0 && n <= 1000
	case "recovery":
		e.Recovery = tick.Dur(n)
	case "needed":
		e.Needed = tick.Dur(n)
	case "until":
		e.Until = tick.Time(n)
	case "by":
		e.By = ID(n)
		return n > 0 && n < 1<<31
	case "captured":
		e.Captured = n == 1
		return n == 1
	default:
		return false
	}
	return n != 0
}

// words splits at spaces; a value in quotes may hold spaces.
func words(line string) ([]string, error) {
	var out []string
	for line = strings.TrimLeft(line, " \t"); line != ""; line = strings.TrimLeft(line, " \t") {
		end := strings.IndexAny(line, " \t")
		if q := strings.IndexByte(line, '"'); q >= 0 && (end < 0 || q < end) {
			quoted, err := strconv.QuotedPrefix(line[q:])
			if err != nil {
				return nil, fmt.Errorf("quotes in %q do not end", line)
			}
			value, err := strconv.Unquote(quoted)
			if err != nil {
				return nil, err
			}
			out = append(out, line[:q]+value)
			line = line[q+len(quoted):]
			continue
		}
		if end < 0 {
			end = len(line)
		}
		out = append(out, line[:end])
		line = line[end:]
	}
	if len(out) == 0 {
		return nil, fmt.Errorf("empty line")
	}
	return out, nil
}
