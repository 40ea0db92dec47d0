package tissue

// Strand is a thread of the conduction system as an electrode pair sees it: the
// signal while the depolarised front, a current dipole that points along the
// thread, stands at each of the equally spaced places along it, the first at its top. Going
// up, the dipole points the other way. Repolarisation is left out: it is some hundred
// times as long as the front, and as much smaller.
type Strand [StrandPlaces]float32

// StrandPlaces is how many places along a strand are kept.
const StrandPlaces = 49

// At is the signal with the front at a share of the way from the top, 0 to 1.
func (s *Strand) At(share float64) float64 {
	x := share * (StrandPlaces - 1)
	if !(x >= 0 && x <= StrandPlaces-1) {
		return 0
	}
	k := min(int(x), StrandPlaces-2)
	late := x - float64(k)
	return float64(float64(s[k])*(1-late)) + float64(float64(s[k+1])*late)
}

// Bipole is a pair of electrodes within the heart.
type Bipole struct {
	Name    string
	Rows    []Row // for each part
	Strands []Strand
}
