package pacer

import "escapement/engine/tick"

// Base says what the lower rate is counted from in modes that pace both chambers.
// The zero Base is ventricular.
type Base uint8

const (
	VentricularBase Base = iota // every ventricular event begins LRI less the paced AV delay
	AtrialBase                  // every atrial event begins LRI; a PVC begins LRI less the paced AV delay
	ModifiedBase                // as atrial after a beat that conducted, else as ventricular
)

// Settings are the numbers of the device. Rates are in beats per minute, lengths in
// microseconds. A zero field switches its function off.
type Settings struct {
	Mode      Mode
	LowerRate float64 // 30 to 180
	Base      Base

	PacedAV  tick.Dur // atrial stimulus to ventricular stimulus, 20 to 400 ms
	SensedAV tick.Dur // sensed P to ventricular stimulus, 20 to 400 ms

	UpperRate float64 // fastest tracking, 80 to 200; 0: no limit but the refractory periods

	PVARP            tick.Dur // atrium refractory after a ventricular event, 150 to 500 ms
	PVAB             tick.Dur // first part of it, deaf, 0 to 250 ms
	AtrialBlanking   tick.Dur // deaf after an atrial event, 50 to 150 ms
	AtrialRefractory tick.Dur // after an atrial event in modes that pace the atrium alone, 150 to 500 ms

	PAVB           tick.Dur // ventricle deaf after an atrial stimulus, 0 to 100 ms
	Crosstalk      tick.Dur // from the atrial stimulus to the end of the crosstalk window, 80 to 120 ms
	SafetyStimulus bool     // answer a signal in the crosstalk window by a stimulus at its end

	VentricularRefractory tick.Dur // 150 to 500 ms

	// PostPVC is the PVARP after a PVC, a ventricular signal with no atrial event
	// since the last ventricular one. Atrial signals in refractory periods count as
	// atrial events only with RefractoryCounts.
	PostPVC          tick.Dur
	RefractoryCounts bool

	// PastLowerRate lets the AV delay of a late P in VDD run past the lower rate
	// interval; without it the stimulus comes at the lower rate.
	PastLowerRate bool

	AdaptiveAV    Adaptive // AV delays shorten at high rates, both by the same amount
	AdaptivePVARP Adaptive
	Hysteresis    Hysteresis
	LongerAV      LongerAV
	ShorterAV     ShorterAV
	Noise         Noise
	Sensor        Sensor
	ChangeLimit   ChangeLimit
	Night         Night
	Switch        Switch
	Loop          Loop
	Fall          Fall
	Stabilise     Stabilise
	Backup        Backup
	Magnet        Magnet
	Sites         Sites

	// AtrialDelay puts off an atrial stimulus to this long after an atrial signal in
	// a refractory period, 200 to 400 ms; the AV delay after it shortens.
	AtrialDelay tick.Dur
}

// Adaptive shortens a length in proportion to the rate between two rates.
type Adaptive struct {
	From, To float64  // rates at which it begins and is complete; To 0: off
	Shortest tick.Dur // the length at To and above
}

// Hysteresis waits longer for the heart after a sensed beat.
type Hysteresis struct {
	Rate   float64 // below the lower rate by 5 to 20; 0: off
	Every  int     // after so many stimuli in a row wait so once for Cycles cycles; 0: never
	Cycles int
}

// LongerAV lengthens the AV delays while the heart conducts, and looks from time to
// time whether it does: positive AV hysteresis, AV-delay extension with search.
type LongerAV struct {
	By      tick.Dur // 50 to 200 ms; 0: off
	Longest tick.Dur // no AV delay above this; 0: no bound
	Every   int      // look after so many ventricular stimuli; 0: only after a conducted beat
	Misses  int      // give up after so many stimuli at its end; 0 is 1
}

// ShorterAV shortens the AV delays after a conducted beat, to pace ahead of
// conduction: negative AV hysteresis.
type ShorterAV struct {
	By       tick.Dur // below the conduction time found, 10 to 60 ms; 0: off
	Shortest tick.Dur // no AV delay below this
	Beats    int      // go back after so many ventricular stimuli; 0: stay
}

// Noise takes signals in the last part of a refractory period for interference.
type Noise struct {
	Window   tick.Dur // each signal begins it anew, 60 to 200 ms; 0: off
	Inhibits bool     // give no stimulus while it runs; else pace regardless
}

// Sensor drives the rate by activity in modes with R.
type Sensor struct {
	Slope      float64  // beats per minute above the lower rate at activity 1; 0: off
	Limit      float64  // fastest rate by sensor
	Rise, Fall tick.Dur // time from the lower rate to the limit and back; 0: at once
	Activity   []Activity
}

// Activity is the level from a time on, 0 to 1. Times ascend.
type Activity struct {
	At    tick.Time
	Level float64
}

// ChangeLimit bounds the next ventricular interval by the last one, in per cent.
type ChangeLimit struct{ Longer, Shorter float64 }

// Night is another lower rate between two times of the strip.
type Night struct {
	Rate     float64 // 0: off
	From, To tick.Time
}

// Switch leaves a tracking mode while the atrium is too fast.
type Switch struct {
	Rate   float64  // atrial rate above which an interval counts as short; 0: off
	Short  int      // so many short intervals ...
	Of     int      // ... of the last so many, at most 32
	Mode   Mode     // DDI or VVI; zero: DDI if the atrium is paced, else VVI
	Return int      // go back after so many long intervals in a row; 0 is 1
	Ramp   tick.Dur // on the way down each ventricular interval is longer by this; 0: at once
}

// Loop looks for endless-loop tachycardia: stimuli near the upper rate, each
// tracking a P at a constant distance from the one before.
type Loop struct {
	Beats      int      // 8 to 16; 0: off
	RateMargin tick.Dur // an interval counts up to MTRI plus this
	Margin     tick.Dur // VA times may differ by this
	PVARP      tick.Dur // for one cycle, above the VA time
	Withhold   bool     // leave out one ventricular stimulus instead
}

// Fall paces for a while when the rate drops suddenly to the lower rate.
type Fall struct {
	From   float64  // the rate before, at least; 0: off
	Within tick.Dur // time the fall may take
	Beats  int      // stimuli at the lower rate that confirm it; 0 is 1
	Rate   float64  // rate of pacing then
	For    tick.Dur
}

// Stabilise evens irregular ventricular intervals, as in atrial fibrillation.
type Stabilise struct {
	By           tick.Dur // the next interval is at most this longer than the last; 0: off
	Rate         float64  // but not paced faster than this
	OnlySwitched bool     // only while the mode is switched
}

// Backup paces the atrium alone as long as the heart conducts.
type Backup struct {
	Misses, Of        int      // leave off after so many cycles without a ventricular event of the last so many (at most 32); Misses 0: off
	Delay             tick.Dur // from the next atrial event to the stimulus for a missed beat, about 80 ms
	Retest, RetestMax tick.Dur // first time to the next test; doubles at each failure up to the second
}

// Magnet is an asynchronous mode between two times of the strip.
type Magnet struct {
	Mode     Mode // AOO, VOO or DOO; zero: off
	Rate     float64
	AV       tick.Dur // 0: the paced AV delay
	From, To tick.Time
}

// Sites are the leads that pace the ventricles. The zero Sites is the right
// ventricle alone.
type Sites struct {
	Right  Lead     // RV or HisLead; 0 is RV
	Left   bool     // pace the left ventricle too
	Only   bool     // and not the right
	Offset tick.Dur // left after right; negative: left first
	Point  tick.Dur // a second left site this long after the first; 0: none
	ToRV   bool     // AV delays end at the right ventricular stimulus; else at the first
}

// Default is DDD at 60 with textbook numbers; features beyond it are off.
func Default() Settings {
	ms := func(n float64) tick.Dur { return tick.MS(n) }
	return Settings{
		Mode: Mode{'D', 'D', 'D', 'O', 'O'}, LowerRate: 60, UpperRate: 120,
		PacedAV: ms(200), SensedAV: ms(150),
		PVARP: ms(250), PVAB: ms(100), AtrialBlanking: ms(100), AtrialRefractory: ms(250),
		PAVB: ms(30), Crosstalk: ms(110), SafetyStimulus: true, VentricularRefractory: ms(230),
	}
}
