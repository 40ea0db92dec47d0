package pacer

import (
	"fmt"
	"slices"
	"strings"
)

// Mode is a pacing mode of the NBG code: chambers paced, chambers sensed, response
// to sensing, rate modulation, multisite pacing. Letters, never digits.
//
// Source: Bernstein AD et al. PACE 2002;25:260-4.
type Mode struct {
	Paced, Sensed, Response byte // positions I to III
	Rate                    byte // position IV: O or R
	Multisite               byte // position V: O or V
}

// Modes are the three-letter codes that the device knows; each may have R in
// position IV and V in position V.
var Modes = []string{"AAI", "AAT", "AOO", "DDD", "DDI", "DOO", "DVI", "OAO", "ODO", "OVO", "VDD", "VOO", "VVI", "VVT"}

var positions = [...]struct{ name, letters string }{
	{"the chamber paced", "OAVD"}, {"the chamber sensed", "OAVD"}, {"the response to sensing", "OTID"},
	{"rate modulation", "OR"}, {"multisite pacing", "OAVD"},
}

// ParseMode reads a mode as it is written, such as VVI, DDDR or DDDOV. The error
// says which position is wrong and what may stand there.
func ParseMode(code string) (Mode, error) {
	if len(code) < 3 || len(code) > 5 {
		return Mode{}, fmt.Errorf("mode %q: a mode has three to five letters, as VVI, DDDR or DDDRV", code)
	}
	for i := range len(code) {
		if p := positions[i]; !strings.Contains(p.letters, code[i:i+1]) {
			return Mode{}, fmt.Errorf("mode %q: position %d is %s and takes %s, not %q%s", code, i+1, p.name, spaced(p.letters), code[i:i+1], hint(code[i]))
		}
	}
	if !slices.Contains(Modes, code[:3]) {
		return Mode{}, fmt.Errorf("mode %q: this device knows %s", code, strings.Join(Modes, ", "))
	}
	m := Mode{code[0], code[1], code[2], 'O', 'O'}
	if len(code) > 3 {
		m.Rate = code[3]
	}
	if len(code) > 4 {
		m.Multisite = code[4]
	}
	if m.Multisite == 'A' || m.Multisite == 'D' {
		return Mode{}, fmt.Errorf("mode %q: this device has no multisite pacing of the atrium; position 5 takes O or V", code)
	}
	return m, nil
}

func spaced(letters string) string { return strings.Join(strings.Split(letters, ""), " ") }

func hint(c byte) string {
	switch {
	case c == '0':
		return " (the letter O, not a zero)"
	case c == 'S':
		return " (S, single, is for a device before it is implanted: write A or V)"
	case 'a' <= c && c <= 'z':
		return " (capital letters)"
	}
	return ""
}

// String is the code without the O's that say nothing: DDD, DDDR, DDDOV.
func (m Mode) String() string {
	switch {
	case m.Multisite == 'V':
		return string([]byte{m.Paced, m.Sensed, m.Response, m.Rate, 'V'})
	case m.Rate == 'R':
		return string([]byte{m.Paced, m.Sensed, m.Response, 'R'})
	}
	return string([]byte{m.Paced, m.Sensed, m.Response})
}

func has(letter, chamber byte) bool { return letter == chamber || letter == 'D' }

// PacesA to Tracks are what the letters mean for the timing.
func (m Mode) PacesA() bool { return has(m.Paced, 'A') }
func (m Mode) PacesV() bool { return has(m.Paced, 'V') }

// SensesA tells whether atrial signals are used.
func (m Mode) SensesA() bool { return has(m.Sensed, 'A') }

// SensesV tells whether ventricular signals are used.
func (m Mode) SensesV() bool { return has(m.Sensed, 'V') }

// Tracks tells whether a P wave begins an AV delay: DDD and VDD.
func (m Mode) Tracks() bool { return m.Response == 'D' && m.SensesA() && m.PacesV() }

// Triggers tells whether a signal is answered by a stimulus at once: AAT and VVT.
func (m Mode) Triggers() bool { return m.Response == 'T' }

// atrialOnly and dual group the modes by how their base timer runs.
func (m Mode) atrialOnly() bool { return m.Paced == 'A' }
func (m Mode) dual() bool       { return m.Paced == 'D' }
func (m Mode) ddi() bool        { return m.dual() && m.SensesA() && m.Response == 'I' }

// like is the base mode of three letters with the rate and multisite letters of m.
func (m Mode) like(base Mode) Mode {
	base.Rate, base.Multisite = m.Rate, m.Multisite
	return base
}
