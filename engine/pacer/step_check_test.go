package pacer_test

import (
	"strings"
	"testing"
)

// published are rhythms whose record can be written down by hand from published
// rules or common practice; both devices must give them. The record begins at from
// and is compared as far as want goes.
var published = []struct {
	name     string
	settings func(*stepSettings)
	world    *world
	from     int
	want     string
}{
	{
		// Furman 1985: upper rate interval - (AV delay + PVARP) = 500 - 400 is the
		// room for lengthening; 460 ms leaves 4:3 with AV 150, 190, 230.
		name:     "upper rate behaviour, 4:3",
		settings: func(s *stepSettings) { s.sensed = 150 },
		world:    newWorld(5000).every('A', 460, 460), from: 400,
		want: "460 A tracked, 610 VP, 920 A tracked, 1110 VP, 1380 A tracked, 1610 VP, 1840 A refractory, 2300 A tracked, 2450 VP",
	},
	{
		name:     "upper rate behaviour, 2:1 below 400 ms",
		settings: func(s *stepSettings) { s.sensed = 150 },
		world:    newWorld(3000).every('A', 380, 380), from: 300,
		want: "380 A tracked, 530 VP, 760 A refractory, 1140 A tracked, 1290 VP, 1520 A refractory",
	},
	{
		// 400 ms to the very end of PVARP: it is sensed.
		name:     "a P at the end of PVARP is tracked",
		settings: func(s *stepSettings) { s.sensed = 150 },
		world:    newWorld(3000).every('A', 400, 400), from: 300,
		want: "400 A tracked, 550 VP, 800 A tracked, 1050 VP, 1200 A refractory, 1600 A tracked",
	},
	{
		name:     "ventricular timing: 800 + 150",
		settings: func(s *stepSettings) {},
		world:    newWorld(4000).answering('A', 'V', 150), from: 700,
		want: "800 AP, 950 V inhibits, 1750 AP, 1900 V inhibits, 2700 AP",
	},
	{
		name:     "atrial timing: 1000, the V-V of the second beat 1050",
		settings: func(s *stepSettings) { s.base = fromAtrium },
		world:    newWorld(4000).answering('A', 'V', 150, 0), from: 700,
		want: "800 AP, 950 V inhibits, 1800 AP, 2000 VP, 2800 AP",
	},
	{
		name:     "modified timing: the atrium counts after a conducted beat",
		settings: func(s *stepSettings) { s.base = fromEither },
		world:    newWorld(5000).answering('A', 'V', 150, 0).at('V', 3400), from: 700,
		want: "800 AP, 950 V inhibits, 1800 AP, 2000 VP, 2800 AP, 2950 V inhibits, 3400 V resets, 4200 AP",
	},
	{
		// Upper rate interval 500 is longer than VA 300 + AV 150.
		name:     "endless loop at the upper rate",
		settings: func(s *stepSettings) { s.sensed = 150 },
		world:    newWorld(4000).at('V', 700).at('A', 1000).answering('V', 'A', 300), from: 650,
		want: "700 V resets, 1000 A tracked, 1200 VP, 1500 A tracked, 1700 VP, 2000 A tracked",
	},
	{
		name:     "no loop: the PVARP after a premature beat is longer",
		settings: func(s *stepSettings) { s.sensed, s.afterPVC = 150, 400 },
		world:    newWorld(4000).at('V', 700).at('A', 1000).answering('V', 'A', 200), from: 650,
		want: "700 V resets, 1000 A refractory, 1500 AP, 1700 VP, 1900 A refractory, 2500 AP",
	},
	{
		// AV delay 200 + PVARP 300 is longer than the upper rate interval of 429: it
		// is never reached, at a sinus rate below the limit.
		name: "2:1 below the upper rate",
		settings: func(s *stepSettings) {
			s.sensed, s.pvarp, s.upper = 200, 300, 429
		},
		world: newWorld(3000).every('A', 480, 480), from: 400,
		want: "480 A tracked, 680 VP, 960 A refractory, 1440 A tracked, 1640 VP, 1920 A refractory, 2400 A tracked",
	},
	{
		// Barold 2012: P-P 540 is below PR 250 + PVARP 310, though above AV delay +
		// PVARP = 430; a premature beat starts it and it goes on.
		name:     "P waves locked in PVARP",
		settings: func(s *stepSettings) { s.pvarp = 310 },
		world:    newWorld(4000).at('V', 500).every('A', 540, 540).every('V', 790, 540), from: 400,
		want: "500 V resets, 540 A blanked, 790 V resets, 1080 A refractory, 1330 V resets, 1620 A refractory, 1870 V resets",
	},
	{
		name:     "P waves at 560 escape from PVARP",
		settings: func(s *stepSettings) { s.pvarp = 310 },
		world:    newWorld(3000).at('V', 520).every('A', 560, 560).at('V', 810), from: 500,
		want: "520 V resets, 560 A blanked, 810 V resets, 1120 A tracked, 1310 VP, 1680 A tracked, 1810 VP",
	},
	{
		// The device's part of the loop without re-entry: 750 - 300 - 250 leaves 200 ms
		// from the retrograde P to a stimulus that cannot capture (Heart Rhythm 2016).
		name: "retrograde P in PVARP, stimulus 200 ms later",
		settings: func(s *stepSettings) {
			s.lower, s.paced, s.pvarp = 750, 300, 300
		},
		world: newWorld(4000).answering('V', 'A', 250), from: 400,
		want: "450 AP, 750 VP, 1000 A refractory, 1200 AP, 1500 VP, 1750 A refractory, 1950 AP, 2250 VP",
	},
	{
		name:     "a signal 20 ms after the atrial stimulus is not seen",
		settings: crosstalk, world: newWorld(2500).at('V', 840), from: 700,
		want: "820 AP, 840 V blanked, 1000 VP, 1820 AP",
	},
	{
		name:     "70 ms after it, a safety stimulus",
		settings: crosstalk, world: newWorld(2500).at('V', 890), from: 700,
		want: "820 AP, 890 V safety, 930 VP, 1750 AP",
	},
	{
		name:     "130 ms after it, inhibition",
		settings: crosstalk, world: newWorld(2500).at('V', 950), from: 700,
		want: "820 AP, 950 V inhibits, 1770 AP",
	},
	{
		name:     "crosstalk without a window: the atrial interval is 840",
		settings: func(s *stepSettings) { s.pavb = 30 },
		world:    newWorld(4000).answering('A', 'V', 40), from: 700,
		want: "800 AP, 840 V inhibits, 1640 AP, 1680 V inhibits, 2480 AP",
	},
	{
		name:     "crosstalk with a window: 910",
		settings: func(s *stepSettings) { s.pavb, s.crosstalk = 30, 110 },
		world:    newWorld(4000).answering('A', 'V', 40), from: 700,
		want: "800 AP, 840 V safety, 910 VP, 1710 AP, 1750 V safety, 1820 VP",
	},
	{
		name:     "DDI does not track: V at 1000",
		settings: func(s *stepSettings) { s.mode = stepModes[2] },
		world:    newWorld(5000).every('A', 700, 800), from: 600,
		want: "700 A inhibits, 1000 VP, 1500 A inhibits, 2000 VP, 2300 A inhibits, 3000 VP, 3100 A refractory, 3800 AP, 3900 A refractory, 4000 VP",
	},
	{
		name:     "VDD without P: V at 1000",
		settings: func(s *stepSettings) { s.mode = stepModes[1] },
		world:    newWorld(4000).at('A', 1600), from: 600,
		want: "1000 VP, 1600 A tracked, 1720 VP, 2720 VP",
	},
	{
		name:     "VVI senses the T wave: 320 + 1000",
		settings: func(s *stepSettings) { s.mode = stepModes[3] },
		world:    newWorld(4000).answering('V', 'V', 320), from: 600,
		want: "1000 VP, 1320 V resets, 2320 VP",
	},
	{
		name:     "AAI senses the far-field R: 300 + 1000",
		settings: func(s *stepSettings) { s.mode, s.arp = stepModes[4], 250 },
		world:    newWorld(4000).answering('A', 'A', 300), from: 600,
		want: "1000 AP, 1300 A resets, 2300 AP",
	},
}

func crosstalk(s *stepSettings) { s.paced, s.pavb, s.crosstalk = 180, 40, 110 }

// common are the settings of the table above where a row does not say.
func common() stepSettings {
	return stepSettings{mode: stepModes[0], lower: 1000, upper: 500, paced: 200, sensed: 120,
		pvarp: 250, pvab: 100, vrp: 250, arp: 250, blanking: 50, safety: true, past: true}
}

// devices are the two ways to live through a world.
var devices = []struct {
	name string
	run  func(stepSettings, *world) life
}{{"fixed step", runSteps}, {"events", runEvents}}

func TestPublishedRhythms(t *testing.T) {
	for _, c := range published {
		for _, d := range devices {
			t.Run(c.name+", "+d.name, func(t *testing.T) {
				s := common()
				c.settings(&s)
				var rs []record
				for _, r := range d.run(s, c.world.copy()).records {
					if r.ms >= float64(c.from) {
						rs = append(rs, r)
					}
				}
				if got := format(rs); got != c.want && !strings.HasPrefix(got, c.want+", ") {
					t.Errorf("record\n%s\nwant\n%s", got, c.want)
				}
			})
		}
	}
}
