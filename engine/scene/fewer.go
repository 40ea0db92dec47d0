package scene

import (
	"slices"
	"strings"

	"escapement/engine/lead"
)

// Fewer leaves out the lead that says least about rhythm: the last that is neither II
// nor V1, then V1. It keeps one, and tells whether it left out any.
func Fewer(o *Options) bool {
	if o.Lanes != nil {
		at := weakest(o.Lanes, func(lane string) (lead.Name, bool) {
			name, ok := strings.CutPrefix(lane, "lead:")
			if !ok {
				return 0, false
			}
			return lead.Parse(name)
		})
		if at >= 0 {
			o.Lanes = slices.Delete(slices.Clone(o.Lanes), at, at+1)
		}
		return at >= 0
	}
	at := weakest(o.Leads, func(n lead.Name) (lead.Name, bool) { return n, true })
	if at >= 0 {
		o.Leads = slices.Delete(slices.Clone(o.Leads), at, at+1)
	}
	return at >= 0
}

// weakest is the place of the lead to leave out, or -1.
func weakest[T any](list []T, of func(T) (lead.Name, bool)) int {
	at, n, worst := -1, 0, -1
	for i := len(list) - 1; i >= 0; i-- {
		l, ok := of(list[i])
		if !ok {
			continue
		}
		n++
		rank := 2
		switch l {
		case lead.II:
			rank = 0
		case lead.V1:
			rank = 1
		}
		if rank > worst {
			at, worst = i, rank
		}
	}
	if n < 2 {
		return -1
	}
	return at
}

// leadLanes names the leads that are drawn, each over the whole window.
func (o *Options) leadLanes() []string {
	var out []string
	for _, l := range o.Leads {
		out = append(out, l.String())
	}
	if o.Lanes == nil {
		return out
	}
	out = nil
	for _, lane := range o.Lanes {
		if name, ok := strings.CutPrefix(lane, "lead:"); ok {
			out = append(out, name)
		}
	}
	return out
}
