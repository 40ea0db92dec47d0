package contrast

import (
	"escapement/engine/event"
	"escapement/engine/measure"
	"escapement/engine/tick"
)

// Beat is a P or a QRS of either side with its partner.
type Beat struct {
	Channel       byte     // A for a P, V for a QRS
	Before, After event.ID // first activations; 0: none
	T0, T1        tick.Time
	Sign          Sign
	What          string // what else differs; may be empty
}

// By is how much later the beat comes after; 0 where it has no partner.
func (b *Beat) By() tick.Dur {
	if b.Before == 0 || b.After == 0 {
		return 0
	}
	return b.T1.Sub(b.T0)
}

func beats(before, after Side) []Beat {
	out := []Beat{}
	until := min(before.Log.Span, after.Log.Span)
	for _, kind := range [...]string{"P", "QRS"} {
		b, tb := only(before.Report, kind, until)
		a, ta := only(after.Report, kind, until)
		pair(tb, ta, Reach, func(i, j int) {
			x := Beat{Channel: 'A'}
			if kind == "QRS" {
				x.Channel = 'V'
			}
			switch {
			case j < 0:
				x.Before, x.T0, x.Sign = b[i].ID, tb[i], Gone
			case i < 0:
				x.After, x.T1, x.Sign = a[j].ID, ta[j], New
			default:
				x.Before, x.T0, x.After, x.T1 = b[i].ID, tb[i], a[j].ID, ta[j]
				x.What = became(b[i], a[j])
				switch by := x.By(); {
				case by < 0:
					x.Sign = Earlier
				case by > 0:
					x.Sign = Later
				case x.What != "":
					x.Sign = Altered
				}
			}
			out = append(out, x)
		})
	}
	inOrder(out, func(b *Beat) (tick.Time, Sign) {
		switch {
		case b.Before == 0:
			return b.T1, b.Sign
		case b.After == 0:
			return b.T0, b.Sign
		}
		return min(b.T0, b.T1), b.Sign
	})
	return out
}

func only(r *measure.Report, kind string, until tick.Time) (list []*measure.Beat, at []tick.Time) {
	for i := range r.Beats {
		if b := &r.Beats[i]; b.Kind == kind && b.T <= until {
			list, at = append(list, b), append(at, b.T)
		}
	}
	return list, at
}

// became says what a beat is that its partner was not.
func became(b, a *measure.Beat) string {
	switch {
	case b.Origin != a.Origin:
		return "was " + b.Origin + ", now " + a.Origin
	case b.Retrograde != a.Retrograde:
		if a.Retrograde {
			return "now from below"
		}
		return "now from above"
	case b.Kind == "P" && b.Conducted != a.Conducted:
		if a.Conducted {
			return "now conducted"
		}
		return "now not conducted"
	case b.Fusion != a.Fusion:
		if a.Fusion {
			return "now fusion"
		}
		return "now no fusion"
	}
	return ""
}
