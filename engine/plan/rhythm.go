package plan

import "escapement/engine/heart"

const atria = "heart.atria"

// rhythmFields describe what drives the atria besides the sinus node.
func rhythmFields() []*Field {
	const flutter, fib = atria + ".flutter", atria + ".fibrillation"
	return []*Field{
		{Path: atria + ".rhythm", Label: "atrial rhythm", Kind: Choice, Word: "sinus", Choices: []string{"sinus", "flutter", "fibrillation"}, Help: "Flutter: a circuit that passes the right atrium once a cycle and goes on from there. Fibrillation: waves that arrive at random at each atrial site, by the seed; no front crosses the atria."},
		num(flutter+".cycle_ms", "flutter cycle", "ms", 240, 120, 500).normal(200, 260, "entry of an ontology (PMID 28835836); other pages give 170 to 250").help("One turn of the circuit. A beat that enters it, paced or premature, moves the next turn to one cycle after itself."),
		num(flutter+".ends_below_ms", "flutter ends below", "ms", 0, 0, 500).help("A beat that reaches the circuit sooner than this after the last turn is blocked both ways and ends it; 0 for never. The excitable gap is 66 to 79 ms (Maury et al., Arch Cardiovasc Dis 2010;103:585); where in it a circuit ends differs, the number is a choice.").advanced(),
		num(fib+".cycle_ms", "fibrillation, mean interval", "ms", 182, 60, 500).normal(147, 227, "Petrutiu et al., J Electrocardiol 2007;40:155").help("At one place in the atria."),
		num(fib+".shortest_ms", "fibrillation, shortest interval", "ms", 110, 30, 400).help("Also the refractory period of the atria that fibrillate; a choice. Above it the intervals are exponential.").advanced(),
		num(atria+".rhythm_from_ms", "rhythm begins at", "ms", 1, 1, 86400000).advanced(),
		opt(atria+".rhythm_until_ms", "rhythm ends at", "ms", 1, 86400000, "Left out: it does not end by itself.").advanced(),
	}
}

// rhythm reads the atrial rhythm.
func (p *Plan) rhythm() heart.AtrialRhythm {
	r := heart.AtrialRhythm{FromMS: p.number(atria + ".rhythm_from_ms"), UntilMS: p.number(atria + ".rhythm_until_ms")}
	switch p.text(atria + ".rhythm") {
	case "flutter":
		r.Driver, r.CycleMS, r.EndsBelowMS = heart.Reentry, p.number(atria+".flutter.cycle_ms"), p.number(atria+".flutter.ends_below_ms")
	case "fibrillation":
		r.Driver, r.CycleMS, r.LeastMS = heart.Arrivals, p.number(atria+".fibrillation.cycle_ms"), p.number(atria+".fibrillation.shortest_ms")
	}
	return r
}
