package sched

import (
	"fmt"
	"time"
)

// debtCap is where debt stops adding worth, though not where it stops being shown: a source that could
// not be observed for half a year must not take every session from all others when it comes back.
const debtCap = 5

// CadenceNeed returns what an exactly full visit is worth at a debt: D² up to 1, so that what is not yet
// due is worth little, then 2D − 1, which goes on at the slope reached there, to debt 5.
func CadenceNeed(debt float64) float64 {
	d := max(0, min(debt, debtCap))
	if d <= 1 {
		return d * d
	}
	return 2*d - 1
}

// A ReceiverNeed is what a visit with one receiver of the aim is worth now.
type ReceiverNeed struct {
	Receiver string
	Debt     float64 // the debt that its need follows from
	Need     float64
	Why      string
}

// Needs returns what a visit with each receiver of the rule is worth at a time, in the order of the
// rule's receivers. a is the account at that time. A receiver that the open epoch still lacks is worth
// what the whole debt would be without that epoch, since all of it lapses otherwise; one that has paid
// its share of the open epoch is worth what it has not yet paid. Within MinGapDays of a complete epoch
// nothing is needed.
func (r CadenceRule) Needs(a Account, at time.Time) []ReceiverNeed {
	needs := make([]ReceiverNeed, len(r.Receivers))
	for i, name := range r.Receivers {
		n := ReceiverNeed{Receiver: name, Debt: a.Debt, Need: CadenceNeed(a.Debt), Why: a.Why}
		gap := daysBetween(a.LastEpoch, at)
		switch paid := a.paid(i); {
		case a.Open && paid >= 1:
			n.Need, n.Why = 0, "has paid its share of this epoch; "+a.Why
		case a.Open:
			n.Debt = a.Owed
			n.Need = CadenceNeed(a.Owed) * (1 - paid)
		case !a.LastEpoch.IsZero() && gap < r.MinGapDays:
			n.Need, n.Why = 0, fmt.Sprintf("last %.1f d ago, not wanted within %.3g d", gap, r.MinGapDays)
		}
		needs[i] = n
	}
	return needs
}

func (a Account) paid(i int) float64 {
	if i < len(a.ByReceiver) {
		return a.ByReceiver[i].Paid
	}
	return 0
}

// A PhaseVisit is an observation at an orbital phase.
type PhaseVisit struct {
	Turns float64 // orbital phase, any number of turns
	Paid  float64 // share of a full visit, 0 to 1
}

// PhaseNeeds returns for each of the bins, the first from phase 0 to 1/bins, which share of its perBin
// visits is missing: 1 nothing there yet, 0 full. It is nil without bins or visits wanted.
func PhaseNeeds(bins, perBin int, visits []PhaseVisit) []float64 {
	if bins < 1 || perBin < 1 {
		return nil
	}
	have := make([]float64, bins)
	for _, v := range visits {
		turns := v.Turns - float64(int(v.Turns))
		if turns < 0 {
			turns++
		}
		have[min(int(turns*float64(bins)), bins-1)] += max(0, min(v.Paid, 1))
	}
	for i, h := range have {
		have[i] = max(0, float64(perBin)-h) / float64(perBin)
	}
	return have
}

// ConjunctionNeed returns which share of the wanted passages is missing. Each of passages is the share of
// the window's information that an observed passage caught, 0 to 1.
func ConjunctionNeed(wanted int, passages []float64) float64 {
	if wanted < 1 {
		return 0
	}
	have := 0.0
	for _, p := range passages {
		have += max(0, min(p, 1))
	}
	return max(0, float64(wanted)-have) / float64(wanted)
}

// connectNeed is the need where the predicted error reaches the limit. A cadence reaches 2·5 − 1 = 9
// at most: near the limit nothing of the same priority comes before keeping the count.
const connectNeed = 10

// ConnectNeed returns what a visit is worth for keeping the count of turns: it rises with the fourth power
// of the pulse-phase error predicted for the next session over the limit, both in turns, and stays
// where it is beyond the limit. It passes a cadence that is due (1) at 0.56 of the limit and any cadence
// at 0.97.
func ConnectNeed(predictedTurns, limitTurns float64) float64 {
	if limitTurns <= 0 {
		return 0
	}
	x := max(0, min(predictedTurns/limitTurns, 1))
	return connectNeed * x * x * x * x
}
