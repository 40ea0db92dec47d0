package contrast

import "escapement/engine/tick"

// pair walks two sorted sequences of instants and calls f once for every member: with
// both places for a pair, with -1 for the side that has none. A pair are two members
// of which neither has a nearer one on the other side, at most reach apart.
func pair(before, after []tick.Time, reach tick.Dur, f func(b, a int)) {
	i, j := 0, 0
	for i < len(before) && j < len(after) {
		gap := after[j].Sub(before[i])
		switch {
		case gap > reach, gap > 0 && nearer(before, i, after[j]):
			f(i, -1)
			i++
		case -gap > reach, gap < 0 && nearer(after, j, before[i]):
			f(-1, j)
			j++
		default:
			f(i, j)
			i++
			j++
		}
	}
	for ; i < len(before); i++ {
		f(i, -1)
	}
	for ; j < len(after); j++ {
		f(-1, j)
	}
}

// nearer tells whether the next member of a sequence is nearer to an instant than
// this one.
func nearer(times []tick.Time, i int, t tick.Time) bool {
	return i+1 < len(times) && distance(times[i+1], t) < distance(times[i], t)
}

func distance(t, u tick.Time) tick.Dur {
	if t < u {
		t, u = u, t
	}
	return t.Sub(u)
}

// inTurn pairs the members in their order; both sequences are as long.
func inTurn(n int, f func(b, a int)) {
	for i := range n {
		f(i, i)
	}
}
