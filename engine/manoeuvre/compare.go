package manoeuvre

import (
	"fmt"
	"math"
	"slices"

	"escapement/engine/plan"
	"escapement/engine/tick"
)

// OtherKind is what a response of another kind counts as, in ms beside differences of
// intervals (a choice of this package: longer than most of them).
const OtherKind = 100

// Protocol says what is tried; an empty list leaves its family out.
type Protocol struct {
	Drives    []int `json:"drives_ms"`
	Couplings []int `json:"couplings_ms"` // of extrastimuli
	Faster    []int `json:"faster_ms"`    // a ventricular train than the tachycardia
	HisAfter  []int `json:"his_after_ms"` // a ventricular beat after the His deflection; negative: before
}

// Usual is the protocol of a comparison that asks for nothing else.
func Usual() Protocol {
	p := Protocol{Drives: []int{600, 500, 400}, Faster: []int{10, 20, 30, 40}}
	for c := 200; c < 600; c += 10 {
		p.Couplings = append(p.Couplings, c)
	}
	for d := -60; d <= 60; d += 5 {
		p.HisAfter = append(p.HisAfter, d)
	}
	return p
}

// Comparison is what two hearts answer to a protocol, with what they answer most
// differently in front.
type Comparison struct {
	Titles   [2]string    `json:"titles"`
	Text     string       `json:"text"`
	Distance string       `json:"distance"` // how it is reckoned
	Tried    int          `json:"tried"`
	Left     []string     `json:"left_out"` // families that could not be done, and why
	Best     []Difference `json:"best"`     // the most different of each family, in the order of Ranked
	Ranked   []Difference `json:"ranked"`
	Zones    [2][]*Zone   `json:"zones"` // by heart: atrial, ventricular
}

// Difference is one manoeuvre with both answers.
type Difference struct {
	Family   string      `json:"family"` // stable: "ventricular_overdrive"
	Text     string      `json:"text"`   // what is done
	Response [2]string   `json:"response"`
	Numbers  [2][]Number `json:"numbers"`
	MS       float64     `json:"distance_ms"`
	By       string      `json:"by"` // what makes the distance
}

const distance = "the largest difference, in ms, of an interval that both answers have; a response of another kind counts as 100 ms"

// Compare tries a protocol on two plans and ranks the manoeuvres by how differently
// they are answered; most bounds the list, 0 for all. Error: a plan.Diagnoses of a plan
// that does not compile.
func Compare(a, b *plan.Plan, p Protocol, most int) (*Comparison, error) {
	c := &Comparison{Titles: [2]string{a.Title, b.Title}, Distance: distance, Left: []string{}, Best: []Difference{}, Ranked: []Difference{}}
	if err := c.extrastimuli(a, b, p); err != nil {
		return nil, err
	}
	if err := c.tachycardias(a, b, p); err != nil {
		return nil, err
	}
	slices.SortStableFunc(c.Ranked, func(x, y Difference) int {
		switch {
		case x.MS > y.MS:
			return -1
		case x.MS < y.MS:
			return 1
		}
		return 0
	})
	for _, d := range c.Ranked {
		if !slices.ContainsFunc(c.Best, func(x Difference) bool { return x.Family == d.Family }) {
			c.Best = append(c.Best, d)
		}
	}
	c.Text = "No manoeuvre of the protocol is answered differently."
	if len(c.Ranked) > 0 {
		d := &c.Ranked[0]
		c.Text = fmt.Sprintf("Of %d manoeuvres, most different: %s (%s, %.0f ms).", c.Tried, d.Text, d.By, d.MS)
	}
	if most > 0 && len(c.Ranked) > most {
		c.Ranked = c.Ranked[:most]
	}
	return c, nil
}

func (c *Comparison) add(family, text string, a, b answer) {
	c.Tried++
	d := Difference{Family: family, Text: text, Response: [2]string{a.slug, b.slug}, Numbers: [2][]Number{a.numbers, b.numbers}}
	for i := range a.numbers {
		if i >= len(b.numbers) || a.numbers[i].Name != b.numbers[i].Name || a.numbers[i].Value == nil || b.numbers[i].Value == nil {
			continue
		}
		if x := math.Abs(*a.numbers[i].Value - *b.numbers[i].Value); x > d.MS {
			d.MS, d.By = math.Round(x*1000)/1000, a.numbers[i].Name
		}
	}
	if a.slug != b.slug && d.MS < OtherKind {
		d.MS, d.By = OtherKind, "another kind of response"
	}
	if d.MS > 0 {
		c.Ranked = append(c.Ranked, d)
	}
}

func (c *Comparison) extrastimuli(a, b *plan.Plan, p Protocol) error {
	for _, f := range []struct{ family, site, where string }{{"atrial_extrastimulus", "right_atrium", "the right atrium"}, {"ventricular_extrastimulus", "rv_apex", "the right ventricular apex"}} {
		x, err := Map(a, f.site, p.Drives, p.Couplings)
		if err != nil {
			return err
		}
		y, err := Map(b, f.site, p.Drives, p.Couplings)
		if err != nil {
			return err
		}
		c.Zones[0], c.Zones[1] = append(c.Zones[0], x), append(c.Zones[1], y)
		for i := range x.At {
			if x.At[i] >= 0 {
				c.add(f.family, fmt.Sprintf("extrastimulus to %s, coupling %d ms after a drive of %d ms", f.where, p.Couplings[i%len(p.Couplings)], p.Drives[i/len(p.Couplings)]), x.answers[i], y.answers[i])
			}
		}
	}
	return nil
}

func (c *Comparison) tachycardias(a, b *plan.Plan, p Protocol) error {
	x, err := induced(a)
	if err != nil {
		return err
	}
	y, err := induced(b)
	if err != nil {
		return err
	}
	for i, t := range []*tachycardia{x, y} {
		if t == nil {
			c.Left = append(c.Left, fmt.Sprintf("ventricular overdrive and a ventricular beat during tachycardia: %q begins no regular tachycardia under 600 ms with its own single stimuli", c.Titles[i]))
		}
	}
	if x == nil || y == nil {
		return nil
	}
	for _, by := range p.Faster {
		d := tick.Dur(by) * tick.Millisecond
		c.add("ventricular_overdrive", fmt.Sprintf("ventricular train %d ms faster than the tachycardia", by), x.overdrive(d), y.overdrive(d))
	}
	for _, at := range p.HisAfter {
		d := tick.Dur(at) * tick.Millisecond
		c.add("his_refractory_beat", fmt.Sprintf("ventricular beat %d ms after the His deflection of the tachycardia", at), x.premature(d), y.premature(d))
	}
	return nil
}
