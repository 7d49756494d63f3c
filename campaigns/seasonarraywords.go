package campaigns

import (
	"fmt"
	"strings"

	"example.org/tallystick/sky/array"
)

// SumWords compares what the planned hours buy with the best that as many could.
func (f *ArrayForecast) SumWords() string {
	if f.Timed() == 0 {
		return "nothing is planned on them"
	}
	return fmt.Sprintf("sum of 1/error^2 %.4g per µs^2 as planned, %.4g at best: %s; one hour more adds at most %.2g %%",
		f.Planned.SumPerUs2, f.Best.SumPerUs2, times(f.Best.SumPerUs2, f.Planned.SumPerUs2), 100*f.HourMore)
}

// PairWords does so for the pairs, by which a background of gravitational waves is told from everything else.
func (f *ArrayForecast) PairWords() string {
	if f.Pairs == 0 {
		return "no two sources are planned: there is no pair to look for a background of gravitational waves with"
	}
	text := fmt.Sprintf("merit for a weak background of gravitational waves %.4g per µs^2 as planned, %.4g at best: %s", f.Planned.PairPerUs2, f.Best.PairPerUs2,
		times(f.Best.PairPerUs2, f.Planned.PairPerUs2))
	if f.Best.PairPerUs2 < f.Planned.PairPerUs2 {
		text += ", so that for pairs the plan is better"
	}
	return text + fmt.Sprintf("; nearer than %.1f°, where a background makes pairs alike: %d of %d, with %.0f %% of the square of the planned merit",
		array.FirstZeroDeg, f.NearPairs, f.Pairs, 100*f.NearShare)
}

func times(best, planned float64) string {
	if !(planned > 0) {
		return "nothing to compare with"
	}
	return fmt.Sprintf("%.2f times", best/planned)
}

// LeastWords says what the best division leaves to every source.
func (f *ArrayForecast) LeastWords() string {
	switch f.Least {
	case LeastCadences:
		return fmt.Sprintf("every visit that cadences and counts of turns ask for, as short as is of use: %.1f h", f.CadencesH)
	case LeastOnce:
		return fmt.Sprintf("one visit of each source with a cadence or a count of turns, as short as is of use; every visit that falls due would take %.1f h, and %.1f h are planned", f.CadencesH, f.TotalH)
	}
	return fmt.Sprintf("nothing: the %.1f h planned do not cover one useful visit of each source", f.TotalH)
}

// GainWords says what the factors of Gains are of.
func (f *ArrayForecast) GainWords() string {
	return fmt.Sprintf("times the S/N of a background, were the %s alike: first while it lies below the noise, then once it rises above it at the "+
		"lowest frequencies, as it does in about ten years", sources(f.Timed()))
}

// AssumedWords says what the comparison rests on.
func (f *ArrayForecast) AssumedWords() string {
	text := "timing noise is white; an hour of any receiver counts as one of the best, at the elevations that the source has in " +
		"the sessions; that others are up in the same hours, and aims of other kinds, are not looked at"
	if f.NoFloor > 0 {
		text += fmt.Sprintf("; %d of %s without floor_us are taken to have no floor", f.NoFloor, sources(len(f.Rows)))
	}
	return text
}

// LeftOutWords names the sources of which too little is known, with what is missing.
func (f *ArrayForecast) LeftOutWords() string {
	if len(f.LeftOut) == 0 {
		return "none"
	}
	var reasons []string
	by := map[string][]string{}
	for _, l := range f.LeftOut {
		if by[l.Reason] == nil {
			reasons = append(reasons, l.Reason)
		}
		by[l.Reason] = append(by[l.Reason], l.Source)
	}
	for i, r := range reasons {
		reasons[i] = fmt.Sprintf("%d, %s: %s", len(by[r]), r, strings.Join(by[r], ", "))
	}
	return strings.Join(reasons, "; ")
}

// sources counts them in words.
func sources(n int) string {
	if n == 1 {
		return "1 source"
	}
	return fmt.Sprintf("%d sources", n)
}
