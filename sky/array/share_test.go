package array

import (
	"errors"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// drawSet is any set that is accepted, with a total that it can have: floors of nothing, of next to nothing and of
// more than an hour's error among them, pulsars that are all alike, and hours that are fixed.
func drawSet(t *rapid.T) (set []Pulsar, totalH float64) {
	one := rapid.Custom(func(t *rapid.T) Pulsar {
		p := Pulsar{
			HourErrorUs: math.Pow(10, rapid.Float64Range(-2, 2).Draw(t, "a")),
			FloorUs:     rapid.SampledFrom([]float64{0, 0, 1e-9, 0.01, 0.1, 1, 30}).Draw(t, "b"),
			Weight:      rapid.SampledFrom([]float64{1, 1, 0.5, 3}).Draw(t, "w"),
			LeastH:      rapid.SampledFrom([]float64{0, 0.5, 2}).Draw(t, "least"),
		}
		p.MostH = p.LeastH + rapid.SampledFrom([]float64{0, 0.25, 3, 100}).Draw(t, "room")
		return p
	})
	set = rapid.SliceOfN(one, 1, 20).Draw(t, "set")
	if rapid.Bool().Draw(t, "alike") {
		for i := range set {
			set[i] = set[0]
		}
	}
	least, most := 0.0, 0.0
	for _, p := range set {
		least += p.LeastH
		most += p.MostH
	}
	return set, least + rapid.Float64Range(0, 1).Draw(t, "part")*(most-least)
}

// marginal is what one hour more adds.
func (p Pulsar) marginal(hours float64) float64 {
	a2 := p.HourErrorUs * p.HourErrorUs
	s := a2 + p.FloorUs*p.FloorUs*hours
	return p.Weight * a2 / (s * s)
}

func TestShareProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		set, total := drawSet(t)
		d, err := Share(set, total)
		if err != nil {
			t.Fatal(err)
		}
		sum := 0.0
		for i, p := range set {
			h := d.Hours[i]
			sum += h
			if h < p.LeastH || h > p.MostH {
				t.Errorf("pulsar %d gets %g h of %g to %g", i, h, p.LeastH, p.MostH)
			}
			const slack = 1e-6
			if m := p.marginal(h); h > p.LeastH+1e-9 && m < d.WorthPerH*(1-slack) || h < p.MostH-1e-9 && m > d.WorthPerH*(1+slack) {
				t.Errorf("pulsar %d: an hour more is worth %g, on the others %g", i, m, d.WorthPerH)
			}
		}
		if math.Abs(sum-total) > 1e-9*(1+total) {
			t.Errorf("%.12g h used of %.12g", sum, total)
		}
		// Nobody is better by giving some of one's hours to another.
		best := Value(set, d.Hours)
		for range 20 {
			i, j := rapid.IntRange(0, len(set)-1).Draw(t, "from"), rapid.IntRange(0, len(set)-1).Draw(t, "to")
			give := math.Min(d.Hours[i]-set[i].LeastH, set[j].MostH-d.Hours[j]) * rapid.Float64Range(0, 1).Draw(t, "give")
			if i == j || !(give > 0) {
				continue
			}
			other := append([]float64{}, d.Hours...)
			other[i] -= give
			other[j] += give
			if v := Value(set, other); v > best*(1+1e-9) {
				t.Errorf("%g h from %d to %d: %.15g, before %.15g", give, i, j, v, best)
			}
		}
	})
}

// With more hours nobody gets less, an hour more is worth less, and all together are worth more.
func TestShareIsMonotone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		set, more := drawSet(t)
		least := 0.0
		for _, p := range set {
			least += p.LeastH
		}
		less := least + rapid.Float64Range(0, 1).Draw(t, "less")*(more-least)
		one, err := Share(set, less)
		if err != nil {
			t.Fatal(err)
		}
		two, err := Share(set, more)
		if err != nil {
			t.Fatal(err)
		}
		for i := range set {
			if two.Hours[i] < one.Hours[i]-1e-9*(1+one.Hours[i]) {
				t.Errorf("pulsar %d: %g h of %g, %g h of %g", i, one.Hours[i], less, two.Hours[i], more)
			}
		}
		if two.WorthPerH > one.WorthPerH*(1+1e-9) {
			t.Errorf("an hour more: %g at %g h, %g at %g h", one.WorthPerH, less, two.WorthPerH, more)
		}
		if a, b := Value(set, one.Hours), Value(set, two.Hours); b < a*(1-1e-12) {
			t.Errorf("value %g at %g h, %g at %g h", a, less, b, more)
		}
	})
}

// Against a second method: hours handed out in a hundred thousandth parts, each to the pulsar where it adds most.
func TestShareAgainstHandingOut(t *testing.T) {
	set := []Pulsar{
		{HourErrorUs: 0.1, FloorUs: 0.05, Weight: 1, MostH: 9}, {HourErrorUs: 0.2, FloorUs: 0.05, Weight: 2, MostH: 3},
		{HourErrorUs: 0.3, FloorUs: 0.1, Weight: 1, LeastH: 0.5, MostH: 30}, {HourErrorUs: 1.5, FloorUs: 0, Weight: 1, LeastH: 1, MostH: 30},
	}
	const total, parts = 20, 100000
	hours, left := make([]float64, len(set)), float64(total)
	for i, p := range set {
		hours[i] = p.LeastH
		left -= p.LeastH
	}
	for range parts {
		best := -1
		for i, p := range set {
			if hours[i]+left/parts <= p.MostH && (best < 0 || p.marginal(hours[i]) > set[best].marginal(hours[best])) {
				best = i
			}
		}
		hours[best] += left / parts
	}
	d, err := Share(set, total)
	if err != nil {
		t.Fatal(err)
	}
	for i := range set {
		if math.Abs(d.Hours[i]-hours[i]) > 2*left/parts {
			t.Errorf("pulsar %d: %g h, handed out %g", i, d.Hours[i], hours[i])
		}
	}
}

func TestShareAtTheEnds(t *testing.T) {
	p := Pulsar{HourErrorUs: 1, FloorUs: 0.1, Weight: 1, LeastH: 1, MostH: 3}
	set := []Pulsar{p, p}
	var no NoShare
	if _, err := Share(set, 1.9); !errors.As(err, &no) || no.LeastH != 2 || !strings.Contains(err.Error(), "do not cover") {
		t.Errorf("less than the least: %v", err)
	}
	if _, err := Share(set, 6.1); !errors.As(err, &no) || no.MostH != 6 || !strings.Contains(err.Error(), "more than") {
		t.Errorf("more than the most: %v", err)
	}
	for _, total := range []float64{2, 6} {
		d, err := Share(set, total)
		if err != nil || d.Hours[0] != total/2 || d.Hours[1] != total/2 {
			t.Errorf("%g h: %v, %v", total, d, err)
		}
	}
	if d, err := Share(nil, 0); err != nil || len(d.Hours) != 0 {
		t.Errorf("nobody: %v, %v", d, err)
	}
	if _, err := Share(nil, 1); !errors.As(err, &no) {
		t.Errorf("an hour for nobody: %v", err)
	}
	nan, inf := math.NaN(), math.Inf(1)
	for _, bad := range []Pulsar{
		{0, 0, 1, 0, 1}, {nan, 0, 1, 0, 1}, {inf, 0, 1, 0, 1}, {1, -1, 1, 0, 1}, {1, nan, 1, 0, 1}, {1, 0, 0, 0, 1},
		{1, 0, 1, -1, 1}, {1, 0, 1, 2, 1}, {1, 0, 1, 0, inf}, {1, 0, 1, nan, nan},
	} {
		if _, err := Share([]Pulsar{bad}, 0.5); err == nil || errors.As(err, &no) {
			t.Errorf("%+v: %v", bad, err)
		}
	}
	for _, total := range []float64{-1, nan, inf} {
		if _, err := Share(set, total); err == nil || errors.As(err, &no) {
			t.Errorf("%g h: %v", total, err)
		}
	}
	if !math.IsInf(p.ErrorUs(0), 1) || math.Abs(p.ErrorUs(4)-math.Hypot(0.5, 0.1)) > 1e-15 {
		t.Errorf("errors %g and %g", p.ErrorUs(0), p.ErrorUs(4))
	}
}
