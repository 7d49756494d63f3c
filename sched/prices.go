package sched

import "slices"

// sortByDesc sorts the indices by falling key; equal keys keep the order of their indices.
func sortByDesc(order []int, key func(int) Micro) {
	slices.SortFunc(order, func(a, b int) int {
		switch ka, kb := key(a), key(b); {
		case ka > kb:
			return -1
		case ka < kb:
			return 1
		}
		return a - b
	})
}

// minutePrices returns what having each job in the plan is worth beyond the time it takes: the price at
// which a job competes for its place instead of being taken wherever it comes first. All follow from one
// price of a minute of telescope time, the one that makes the bound on the plan least:
//
//	bound(λ) = λ T + Σ_j max(0, max over slots of worth − λ (length + overhead))
//
// which is convex in λ, so thirds of the interval find its least.
func (t *tables) minutePrices() (prices []Micro, perMin Micro) {
	p := t.p
	overhead := t.slotOverhead()
	byLength := make([][]Micro, len(p.Jobs))
	var most Micro
	for j := range p.Jobs {
		if t.chosen[j] {
			byLength[j] = t.bestByLength(j)
			for k, w := range byLength[j] {
				most = max(most, w/Micro(k+p.Jobs[j].MinMin+overhead))
			}
		}
	}
	bound := func(perMin Micro) Micro {
		sum := perMin * Micro(p.Minutes-max(0, p.FromMin))
		for j := range p.Jobs {
			sum += t.minutePrice(j, byLength[j], perMin)
		}
		return sum
	}
	low, high := Micro(0), most+1
	for high-low > 2 {
		third := (high - low) / 3
		if bound(low+third) <= bound(high-third) {
			high -= third
		} else {
			low += third
		}
	}
	prices = make([]Micro, len(p.Jobs))
	for j := range prices {
		prices[j] = t.minutePrice(j, byLength[j], low)
	}
	return prices, low
}

// minutePrice is what is left of the worth of the job's best slot when minutes cost so much; best is by length.
func (t *tables) minutePrice(job int, best []Micro, perMin Micro) (price Micro) {
	for k, w := range best {
		price = max(price, w-perMin*Micro(k+t.p.Jobs[job].MinMin+t.slotOverhead()))
	}
	return price
}

// slotOverhead is what a slot takes beside its own minutes: the overhead and a short slew.
func (t *tables) slotOverhead() int { return ceilMin(t.p.OverheadSec) + 2 }

// bestByLength returns the worth of the job's best slot of each length from MinMin on.
func (t *tables) bestByLength(job int) []Micro {
	j := &t.p.Jobs[job]
	best := make([]Micro, 0, min(j.MaxMin, t.p.Minutes)-min(j.MinMin, t.p.Minutes)+1)
	rows := &t.rows[job]
	ends := make([]int, 0, t.span)
	for e, from := range rows.offset {
		if from != None {
			ends = append(ends, e)
		}
	}
	for i, e := range ends {
		row := rows.row(e)
		if i+1 < len(ends) {
			row = row[:rows.offset[ends[i+1]]-rows.offset[e]]
		}
		for k, w := range row {
			if k == len(best) {
				best = append(best, 0)
			}
			best[k] = max(best[k], w)
		}
	}
	return best
}

// layPull says how much the jobs are worth by the minute where a minute is worth perMin.
func (t *tables) layPull(perMin Micro) {
	t.pull = make([]float64, len(t.p.Jobs))
	for j := range t.p.Jobs {
		if !t.chosen[j] {
			continue
		}
		for k, w := range t.bestByLength(j) {
			t.pull[j] = max(t.pull[j], float64(w)/float64(k+t.p.Jobs[j].MinMin+t.slotOverhead())/max(1, float64(perMin)))
		}
		if t.p.Jobs[j].Must {
			t.pull[j] = 1e9
		}
	}
}
