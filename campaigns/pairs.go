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
		own, best, which := math.Inf(1), math.Inf(1), ""
		for a := range sets {
			for b := a + 1; b < len(sets); b++ {
				errorUs := pairErrorUs(&sets[a], &sets[b], aim)
				if aim.wants(names[a]) && aim.wants(names[b]) {
					own = errorUs
				}
				if errorUs < best {
					best, which = errorUs, names[a]+"+"+names[b]
				}
			}
		}
		if !math.IsInf(own, 1) && best < worthSaying*own {
			return fmt.Sprintf("%s would be better: %.2g µs free of dispersion instead of %.2g", which, best, own)
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

// pairErrorUs is the error of the arrival time at infinite frequency from a visit with each of two receivers.
func pairErrorUs(a, b *radiometer.Setup, aim *Aim) float64 {
	return radiometer.PairErrorUs(a.Receiver.CentreMHz(), visitErrorUs(a, aim), b.Receiver.CentreMHz(), visitErrorUs(b, aim))
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
