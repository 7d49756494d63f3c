package campaigns

import (
	"fmt"
	"math"

	"example.org/tallystick/sky/radiometer"
)

// worthSaying is by how much another pair of receivers must be better to be worth a word.
const worthSaying = 0.9

// betterPair says that two other receivers of a site would give the arrival time free of dispersion with a smaller
// error than the two of a cadence aim, in visits as long; empty where none do or where that is not known.
func (c *Campaign) betterPair(src *Source, aim *Aim) string {
	if len(aim.Receivers) != 2 || aim.Kind != Cadence || src.Spin == nil || src.Flux == nil {
		return ""
	}
	for i := range c.Sites {
		var names []string
		var sets []radiometer.Setup
		for j := range c.Receivers {
			if r := &c.Receivers[j]; r.Site == c.Sites[i].Name {
				names, sets = append(names, r.Name), append(sets, src.setup(r))
			}
		}
		own, best := pairMerit{us: math.Inf(1)}, pairMerit{us: math.Inf(1)}
		which := ""
		for a := range sets {
			for b := a + 1; b < len(sets); b++ {
				merit := meritOfPair(&sets[a], &sets[b], aim)
				if aim.wants(names[a]) && aim.wants(names[b]) {
					own = merit
				}
				if merit.us < best.us {
					best, which = merit, names[a]+"+"+names[b]
				}
			}
		}
		if !math.IsInf(own.us, 1) && best.us < worthSaying*own.us {
			return fmt.Sprintf("%s would be better: %.2g µs free of dispersion instead of %.2g, DM to %.2g pc/cm3 instead of %.2g",
				which, best.us, own.us, best.dm, own.dm)
		}
	}
	return ""
}

// tellPair adds to an account that another pair would be better.
func (b *books) tellPair(row *AccountRow, src *Source, aim *Aim) {
	if better := b.campaign.betterPair(src, aim); better != "" {
		row.Flags = append(row.Flags, better)
	}
}

// A pairMerit is what a visit with each of two receivers gives: the error of the arrival time at infinite frequency, by which
// pairs are ranked, and of the dispersion measure.
type pairMerit struct {
	us float64 // µs
	dm float64 // pc/cm³
}

func meritOfPair(a, b *radiometer.Setup, aim *Aim) pairMerit {
	fa, fb, ea, eb := a.Receiver.CentreMHz(), b.Receiver.CentreMHz(), visitErrorUs(a, aim), visitErrorUs(b, aim)
	return pairMerit{us: radiometer.PairErrorUs(fa, ea, fb, eb), dm: radiometer.PairDMError(fa, ea, fb, eb)}
}

// visitErrorUs is what a visit gives: the wanted error, where that is what is asked for and can be had.
func visitErrorUs(s *radiometer.Setup, aim *Aim) float64 {
	if aim.ToaUs == 0 {
		return s.TOAErrorUs(aim.Minutes, 90)
	}
	if _, err := s.MinutesFor(aim.ToaUs, 90); err != nil {
		return math.Inf(1)
	}
	return aim.ToaUs
}
