package plan

import (
	"strconv"
	"strings"

	"escapement/engine/heart"
)

// parseDrop reads a drop pattern: "3:2" conducts the first two of every three,
// "3:2+1" begins after the first of a group, "10%" drops at random. The empty
// pattern drops nothing. Groups have 1 to 100 impulses.
func parseDrop(s string) (heart.Drop, bool) {
	if s == "" {
		return heart.Drop{}, true
	}
	if share, ok := strings.CutSuffix(s, "%"); ok {
		x, err := strconv.ParseFloat(share, 64)
		return heart.Drop{Chance: x / 100}, err == nil && x >= 0 && x <= 100
	}
	group, phase, shifted := strings.Cut(s, "+")
	of, pass, ok := strings.Cut(group, ":")
	var d heart.Drop
	var errs [3]error
	d.Of, errs[0] = strconv.Atoi(of)
	d.Pass, errs[1] = strconv.Atoi(pass)
	if shifted {
		d.Phase, errs[2] = strconv.Atoi(phase)
	}
	good := ok && errs == [3]error{} && d.Of >= 1 && d.Of <= 100 && d.Pass >= 0 && d.Pass <= d.Of && d.Phase >= 0 && d.Phase < d.Of
	return d, good
}
