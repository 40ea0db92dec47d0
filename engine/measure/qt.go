package measure

import (
	"math"

	"escapement/engine/portmath"
	"escapement/engine/tick"
)

// Corrected is a QT interval in milliseconds, corrected for rate.
type Corrected struct{ Bazett, Fridericia, Framingham, Hodges float64 }

// Correct corrects a QT interval for the RR interval before it. RR must be
// positive.
//
// Sources: Bazett, Heart 1920;7:353, QT/RR^(1/2). Fridericia, Acta Med Scand
// 1920;53:469, QT/RR^(1/3). Framingham: Sagie et al., Am J Cardiol 1992;70:797,
// QT + 154 ms (1 - RR). Hodges, Salerno, Erlien, JACC 1983;1:694, QT + 1.75 ms
// (HR - 60). RR in seconds, HR per minute.
func Correct(qt, rr tick.Dur) Corrected {
	seconds := float64(rr) / float64(tick.Second)
	q := qt.MS()
	return Corrected{
		Bazett:     q / math.Sqrt(seconds),
		Fridericia: q / portmath.Pow(seconds, 1.0/3),
		Framingham: q + float64(154*(1-seconds)),
		Hodges:     q + float64(1.75*(rr.BPM()-60)),
	}
}

// QTc limits used for the finding: prolonged from 450 ms (men) and 460 ms
// (women). Rautaharju, Surawicz, Gettes, AHA/ACCF/HRS part IV, JACC 2009;53:982
// (from memory). A plan has no sex, so the finding asks for the higher one.
const prolongedQTc = 460
