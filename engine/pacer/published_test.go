package pacer

import (
	"strings"
	"testing"
)

// The checks below bear their number of the project's fact sheet on pacing. "Read"
// means that the source or a page that quotes it was read, "memory" that it is
// textbook knowledge not read again, "derived" that it follows from the stated rule.

func TestPublishedStrips(t *testing.T) {
	type row struct {
		name     string // number, source, tag
		settings func(*Settings)
		heart    func(*rig)
		from, to float64
		want     string // the record from a time on, as far as it goes
	}
	sinus := func(pp float64) func(*rig) { return func(r *rig) { r.every(Atrial, pp, pp, 12000) } }
	conducts := func(ar ...float64) func(*rig) {
		return func(r *rig) {
			n := 0
			r.paced = func(p Pulse) {
				if p.Lead == RA {
					if after := ar[n%len(ar)]; after > 0 {
						r.soonSignal(Ventricular, after)
					}
					n++
				}
			}
		}
	}
	plain := func(*Settings) {}
	cross := func(s *Settings) { s.PacedAV, s.PAVB, s.Crosstalk = ms(180), ms(40), ms(110) }
	for _, c := range []row{
		{"4: 1:1 at 550, numbers derived, rule Furman 1985 read", plain, sinus(550), 500, 0,
			"550 AS tracked, 700 VP, 1100 AS tracked, 1250 VP, 1650 AS tracked, 1800 VP"},
		{"5: 4:3 at 460, derived", plain, sinus(460), 400, 0,
			"460 AS tracked, 610 VP, 920 AS tracked, 1110 VP, 1380 AS tracked, 1610 VP, 1840 AS refractory, 2300 AS tracked, 2450 VP"},
		{"6: 5:4 at 470, derived", plain, sinus(470), 400, 0,
			"470 AS tracked, 620 VP, 940 AS tracked, 1120 VP, 1410 AS tracked, 1620 VP, 1880 AS tracked, 2120 VP, 2350 AS refractory, 2820 AS tracked, 2970 VP"},
		{"7: 3:2 at 420, derived", plain, sinus(420), 400, 0,
			"420 AS tracked, 570 VP, 840 AS tracked, 1070 VP, 1260 AS refractory, 1680 AS tracked, 1830 VP"},
		{"8: 2:1 at 380, rule read (Liryc)", plain, sinus(380), 300, 0,
			"380 AS tracked, 530 VP, 760 AS refractory, 1140 AS tracked, 1290 VP, 1520 AS refractory, 1900 AS tracked, 2050 VP"},
		{"10: 2:1 below the upper rate, rule Furman 1985 read", func(s *Settings) { s.SensedAV, s.PVARP, s.UpperRate = ms(200), ms(300), 140 }, sinus(480), 400, 0,
			"480 AS tracked, 680 VP, 960 AS refractory, 1440 AS tracked, 1640 VP, 1920 AS refractory"},
		{"11: ventricular base 950, memory (Hayes and Levine)", plain, conducts(150), 700, 0,
			"800 AP, 950 VS inhibits, 1750 AP, 1900 VS inhibits, 2700 AP"},
		{"12: atrial base 1000, then V-V 1050, memory", func(s *Settings) { s.Base = AtrialBase }, conducts(150, 0), 700, 0,
			"800 AP, 950 VS inhibits, 1800 AP, 2000 VP, 2800 AP, 2950 VS inhibits, 3800 AP"},
		{"modified base, memory", func(s *Settings) { s.Base = ModifiedBase }, conducts(150, 0), 700, 0,
			"800 AP, 950 VS inhibits, 1800 AP, 2000 VP, 2800 AP, 2950 VS inhibits, 3800 AP"},
		{"22: signal at 20 in the blanking, definition read", cross, func(r *rig) { r.at(Ventricular, 840) }, 700, 0,
			"820 AP, 840 VS blanked, 1000 VP, 1820 AP"},
		{"22: signal at 70 in the window, definition read", cross, func(r *rig) { r.at(Ventricular, 890) }, 700, 0,
			"820 AP, 890 VS safety, 930 VP, 1750 AP"},
		{"22: signal at 130 after the window, definition read", cross, func(r *rig) { r.at(Ventricular, 950) }, 700, 0,
			"820 AP, 950 VS inhibits, 1770 AP"},
		{"22: signal at 40, the end of the blanking, is in the window", cross, func(r *rig) { r.at(Ventricular, 860) }, 700, 0,
			"820 AP, 860 VS safety, 930 VP"},
		{"23: crosstalk without safety stimulus 840, derived", func(s *Settings) { s.SafetyStimulus = false }, conducts(40), 700, 0,
			"800 AP, 840 VS inhibits, 1640 AP, 1680 VS inhibits, 2480 AP"},
		{"23: with safety stimulus 910, derived", plain, conducts(40), 700, 0,
			"800 AP, 840 VS safety, 910 VP, 1710 AP, 1750 VS safety, 1820 VP"},
		{"25: DDI does not track, V-V 1000, memory", func(s *Settings) { s.Mode.Response = 'I' }, func(r *rig) { r.every(Atrial, 700, 800, 9000) }, 600, 0,
			"700 AS inhibits, 1000 VP, 1500 AS inhibits, 2000 VP, 2300 AS inhibits, 3000 VP, 3100 AS refractory, 3800 AP, 3900 AS refractory, 4000 VP"},
		{"VVI 70, hysteresis 50: 1200 and 857, memory", func(s *Settings) {
			s.Mode, s.LowerRate, s.Hysteresis.Rate = Mode{'V', 'V', 'I', 'O', 'O'}, 70, 50
		}, func(r *rig) { r.at(Ventricular, 500) }, 400, 0,
			"500 VS resets, 1700 VP, 2557.143 VP, 3414.286 VP"},
		{"VVI 60, T wave at 320: 1320, memory", func(s *Settings) { s.Mode, s.VentricularRefractory = Mode{'V', 'V', 'I', 'O', 'O'}, ms(250) },
			func(r *rig) { r.paced = func(Pulse) { r.soonSignal(Ventricular, 320) } }, 400, 0,
			"1000 VP, 1320 VS resets, 2320 VP, 2640 VS resets"},
		{"VVI 60, T wave at 320, refractory 350: 1000, memory", func(s *Settings) { s.Mode, s.VentricularRefractory = Mode{'V', 'V', 'I', 'O', 'O'}, ms(350) },
			func(r *rig) { r.paced = func(Pulse) { r.soonSignal(Ventricular, 320) } }, 400, 0,
			"1000 VP, 1320 VS refractory, 2000 VP"},
		{"AAI 60, far-field R at 300: 1300, memory", func(s *Settings) { s.Mode = Mode{'A', 'A', 'I', 'O', 'O'} },
			func(r *rig) { r.paced = func(Pulse) { r.soonSignal(Atrial, 300) } }, 400, 0,
			"1000 AP, 1300 AS resets, 2300 AP"},
		{"V base, sensor 120, AR 150: 450, memory", func(s *Settings) {
			s.Mode.Rate = 'R'
			s.Sensor = Sensor{Slope: 100, Limit: 120, Activity: []Activity{{0, 1}}}
		}, conducts(150), 600, 0, "750 AP, 900 VS inhibits, 1200 AP, 1350 VS inhibits, 1650 AP"},
		{"VDD, sinus below the lower rate: 1000, memory", func(s *Settings) { s.Mode.Paced = 'V' }, plainHeart, 400, 0,
			"1000 VP, 2000 VP, 3000 VP"},
		{"21: locked P waves at 540, Barold 2012 read", func(s *Settings) { s.PVARP, s.SensedAV = ms(310), ms(120) },
			func(r *rig) { r.at(Ventricular, 500).every(Atrial, 540, 540, 9000).every(Ventricular, 790, 540, 9000) }, 400, 0,
			"500 VS resets, 540 AS blanked, 790 VS resets, 1080 AS refractory, 1330 VS resets, 1620 AS refractory, 1870 VS resets"},
		{"21: released at 560", func(s *Settings) { s.PVARP, s.SensedAV = ms(310), ms(120) },
			func(r *rig) { r.at(Ventricular, 520, 810).every(Atrial, 560, 560, 9000) }, 500, 0,
			"520 VS resets, 560 AS blanked, 810 VS resets, 1120 AS tracked, 1310 VP, 1680 AS tracked, 1810 VP"},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := Default()
			c.settings(&s)
			r := newRig(t, s)
			c.heart(r)
			got := r.run(6000).text(c.from)
			if got != c.want && !strings.HasPrefix(got, c.want+", ") {
				t.Errorf("record\n%s\nwant\n%s", got, c.want)
			}
		})
	}
}

func plainHeart(*rig) {}
