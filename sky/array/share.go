package array

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"sort"
)

// A Pulsar is one that hours are given to.
type Pulsar struct {
	HourErrorUs float64 // a: the part of the arrival-time error that shrinks with time, after one hour; above 0
	FloorUs     float64 // b: the part that does not; 0 or more
	Weight      float64 // how much it counts; above 0
	LeastH      float64 // hours that it gets in any case
	MostH       float64 // hours that it can have, at least LeastH; not infinite
}

// ErrorUs returns the error of the arrival time that some hours give, µs: infinite without any.
//
//	σ² = a²/t + b²
func (p Pulsar) ErrorUs(hours float64) float64 {
	if !(hours > 0) {
		return math.Inf(1)
	}
	return math.Hypot(p.HourErrorUs/math.Sqrt(hours), p.FloorUs)
}

// Value returns what hours are worth to a set, µs⁻².
//
//	Σ w/σ² = Σ w t/(a² + b² t)
//
// Given:  an entry of hours for each pulsar, in their order
func Value(set []Pulsar, hours []float64) float64 {
	sum := 0.0
	for i, p := range set {
		if hours[i] > 0 {
			sum += p.Weight * hours[i] / (p.HourErrorUs*p.HourErrorUs + p.FloorUs*p.FloorUs*hours[i])
		}
	}
	return sum
}

// A NoShare is the error of Share: the hours do not cover what each pulsar gets in any case, or are more than all can
// have.
type NoShare struct {
	TotalH float64
	LeastH float64 // of all together
	MostH  float64
}

// Error says which of the two it is.
func (n NoShare) Error() string {
	if n.TotalH < n.LeastH {
		return fmt.Sprintf("%.4g h do not cover the least that the pulsars get, %.4g h", n.TotalH, n.LeastH)
	}
	return fmt.Sprintf("%.4g h are more than the pulsars can have, %.4g h", n.TotalH, n.MostH)
}

// A Division is how hours are best divided.
type Division struct {
	Hours     []float64 // of each pulsar
	WorthPerH float64   // what one hour more adds to Value, µs⁻²: the same on every pulsar between its least and its most
}

// Share divides hours among pulsars so that Value is greatest.
//
// The value of one hour more on a pulsar falls as it gets more, so at best it is the same, µ, on all but those kept at
// their least, where it is below µ, or stopped at their most, where it is above:
//
//	w a²/(a² + b² t)² = µ,  t = (√w a/√µ − a²)/b², not below the least nor above the most
//
// In x = 1/√µ each t is a straight line between two breaks. So the total is one between neighbouring breaks of all
// pulsars, and never falls; a pulsar without a floor, whose hours are all worth the same, has both its breaks at one x
// and rises there at once. Halving the list of breaks finds the two that enclose the total, in at most log₂ 4n + 1
// steps, and a straight line gives the rest: nothing is iterated towards.
//
// Given:    hours in all, 0 or more
// Returns:  the division, whose hours add up to the total but for rounding; pulsars without a floor that are worth the
// same share what is left for them in proportion to what they may have. A NoShare where the least of all is
// more than the total, or the most of all less; another error for values out of range
// Neglects: when a pulsar is up, but for its most
// Source:   water-filling: Kuhn & Tucker's conditions for a concave sum under one constraint; gains over equal time on
// single sources, Christy et al. 2014, ApJ 794, 163
// Checked:  TestShareRows, TestShareProperties, TestShareIsMonotone, TestShareAgainstHandingOut, TestShareAtTheEnds
func Share(set []Pulsar, totalH float64) (Division, error) {
	if err := checkAll(set, totalH); err != nil {
		return Division{}, err
	}
	least, most := 0.0, 0.0
	for _, p := range set {
		least += p.LeastH
		most += p.MostH
	}
	const rounding = 1e-12
	if totalH < least*(1-rounding) || totalH > most*(1+rounding) {
		return Division{}, NoShare{totalH, least, most}
	}
	out := Division{Hours: make([]float64, len(set))}
	if len(set) == 0 {
		return out, nil
	}
	lines := make([]line, len(set))
	breaks := make([]float64, 0, 2*len(set))
	for i, p := range set {
		lines[i] = lineOf(p)
		breaks = append(breaks, lines[i].from, lines[i].to)
	}
	slices.Sort(breaks)
	// Step 2k is at break k before what rises there at once has risen, step 2k+1 after.
	sum := func(step int) float64 {
		sum := 0.0
		for i := range lines {
			sum += lines[i].at(breaks[step/2], step%2 == 1)
		}
		return sum
	}
	end := min(sort.Search(2*len(breaks), func(step int) bool { return sum(step) >= totalH }), 2*len(breaks)-1)
	start := max(end-1, 0)
	part, low, high := 0.0, sum(start), sum(end)
	if high > low {
		part = math.Min(math.Max((totalH-low)/(high-low), 0), 1)
	}
	for i := range lines {
		from, to := lines[i].at(breaks[start/2], start%2 == 1), lines[i].at(breaks[end/2], end%2 == 1)
		out.Hours[i] = from + part*(to-from)
	}
	x := breaks[start/2] + part*(breaks[end/2]-breaks[start/2])
	out.WorthPerH = 1 / (x * x)
	return out, nil
}

// A line is what a pulsar gets by x = 1/√µ.
type line struct {
	from, to    float64 // up to from it gets its least, after to its most
	least, most float64
}

func lineOf(p Pulsar) line {
	scale := p.HourErrorUs * math.Sqrt(p.Weight)
	x := func(hours float64) float64 {
		return (p.HourErrorUs*p.HourErrorUs + p.FloorUs*p.FloorUs*hours) / scale
	}
	return line{x(p.LeastH), x(p.MostH), p.LeastH, p.MostH}
}

// at is what it gets at x; where it rises at once, before or after that.
func (l *line) at(x float64, after bool) float64 {
	switch {
	case x < l.from, x == l.from && !(after && l.to == l.from):
		return l.least
	case x >= l.to:
		return l.most
	}
	return l.least + (l.most-l.least)*((x-l.from)/(l.to-l.from))
}

func checkAll(set []Pulsar, totalH float64) error {
	var errs []error
	for i, p := range set {
		fine := func(v float64, ok bool) bool { return ok && !math.IsInf(v, 0) }
		if !fine(p.HourErrorUs, p.HourErrorUs > 0) {
			errs = append(errs, fmt.Errorf("pulsar %d: error of one hour: found %g; accepted above 0", i, p.HourErrorUs))
		}
		if !fine(p.FloorUs, p.FloorUs >= 0) {
			errs = append(errs, fmt.Errorf("pulsar %d: floor: found %g; accepted 0 or more", i, p.FloorUs))
		}
		if !fine(p.Weight, p.Weight > 0) {
			errs = append(errs, fmt.Errorf("pulsar %d: weight: found %g; accepted above 0", i, p.Weight))
		}
		if !fine(p.LeastH, p.LeastH >= 0) || !fine(p.MostH, p.MostH >= p.LeastH) {
			errs = append(errs, fmt.Errorf("pulsar %d: least and most hours: found %g and %g; accepted 0 or more, the most not below the least", i, p.LeastH, p.MostH))
		}
	}
	if !(totalH >= 0) || math.IsInf(totalH, 0) {
		errs = append(errs, fmt.Errorf("hours in all: found %g; accepted 0 or more", totalH))
	}
	return errors.Join(errs...)
}
