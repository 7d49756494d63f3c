package sched

import "slices"

// A bundle looks for the prices of the lowest bound. The bound is a convex function of the prices, the
// largest of one linear function for each route: worth + Σ price × (slots a job may have − slots it has).
// The bundle keeps those met so far and goes to where the largest of them is least, held back from the
// best prices so far by a spring.
//
// Source: Kiwiel, "Proximity control in bundle methods for convex nondifferentiable minimization",
// Mathematical Programming 46 (1990) 105
//
// Products are converted before they are added, which keeps processors from fusing the two and so from
// rounding differently.
type bundle struct {
	low    []float64 // by job: prices stay within these
	high   []float64
	center []float64
	height float64 // the bound at the centre
	spring float64
	cuts   []cut
	nulls  int // steps since the centre moved

	trial []float64
	model float64 // what the cuts say of the trial
	sum   []float64
	grad  []float64
}

// A cut is the linear function of one set of routes, one for each gap.
type cut struct {
	value   float64   // at prices of zero
	slope   []float64 // by job
	share   float64   // in the last trial
	route   []Slot
	lowered bool // its route is none any more
}

const maxCuts = 60

func newBundle(low, high, center []float64) *bundle {
	n := len(center)
	return &bundle{low: low, high: high, center: center, trial: append([]float64(nil), center...), sum: make([]float64, n)}
}

// add takes in the cut met at the trial, where the bound is height, and moves the centre there if that is
// progress. best is the worth of the best plan.
func (b *bundle) add(c cut, height, best float64) {
	first := b.spring == 0
	b.correct(height)
	if len(b.cuts) >= maxCuts {
		b.drop()
	}
	b.cuts = append(b.cuts, c)
	if first {
		b.recentre(height)
		b.spring = c.spring(height - best)
		return
	}
	hoped := max(1, b.height-b.model)
	won := b.height - height
	fit := 2 * b.spring * (1 - won/hoped)
	if won >= 0.1*hoped {
		if won >= 0.5*hoped {
			b.spring = max(fit, b.spring/4)
		}
		b.recentre(height)
		return
	}
	if b.nulls++; b.nulls >= 2 {
		b.spring = min(max(fit, b.spring), 2*b.spring)
	}
}

// correct lowers further what cuts that are no longer true say of the trial, where the bound is height.
func (b *bundle) correct(height float64) {
	for i := range b.cuts {
		if c := &b.cuts[i]; c.lowered {
			c.value -= max(0, c.at(b.trial)-height)
		}
	}
}

// dropLowered forgets the cuts that are no longer true, when it is they that promise nothing, and begins with a spring as at
// first. It is false if there are none.
func (b *bundle) dropLowered(best float64) bool {
	if !slices.ContainsFunc(b.cuts, func(c cut) bool { return c.lowered }) {
		return false
	}
	newest := b.cuts[len(b.cuts)-1] // is never one of them
	b.cuts = slices.DeleteFunc(b.cuts, func(c cut) bool { return c.lowered })
	b.spring, b.nulls = newest.spring(b.height-best), 0
	return true
}

// spring is such that a step along the cut's slope would gain what is to be gained.
func (c *cut) spring(gain float64) float64 {
	square := 1.0
	for _, g := range c.slope {
		square += float64(g * g)
	}
	return square / max(1, gain)
}

// at returns the cut's value at these prices.
func (c *cut) at(prices []float64) float64 {
	v := c.value
	for j, g := range c.slope {
		v += float64(g * prices[j])
	}
	return v
}

// restart forgets everything but the prices to begin at.
func (b *bundle) restart(center []float64) {
	copy(b.center, center)
	copy(b.trial, center)
	b.cuts, b.spring = b.cuts[:0], 0
}

func (b *bundle) recentre(height float64) {
	copy(b.center, b.trial)
	b.height, b.nulls = height, 0
}

// drop forgets the oldest cut that had no part in the last trial, or the oldest of all.
func (b *bundle) drop() {
	at := 0
	for i := range b.cuts {
		if b.cuts[i].share == 0 {
			at = i
			break
		}
	}
	b.forget(at)
}

func (b *bundle) forget(at int) { b.cuts = append(b.cuts[:at], b.cuts[at+1:]...) }

// springSteps bounds the work of finding a trial.
const springSteps = 200

// next sets trial to where the spring and the cuts balance: shares of the cuts are moved from the one that
// is lowest there to the one that is highest until none stands out.
func (b *bundle) next(best float64) {
	k := len(b.cuts)
	total := 0.0
	for i := range b.cuts {
		total += b.cuts[i].share
	}
	if total < 0.5 {
		b.cuts[k-1].share = 1
	} else {
		for i := range b.cuts {
			b.cuts[i].share /= total
		}
	}
	clear(b.sum)
	for i := range b.cuts {
		if share := b.cuts[i].share; share > 0 {
			for j, g := range b.cuts[i].slope {
				b.sum[j] += float64(share * g)
			}
		}
	}
	b.grad = grow(b.grad, k)
	enough := 0.002 * max(1, b.height-best)
	for range springSteps {
		b.place()
		high, low := b.slopes()
		if b.grad[high]-b.grad[low] < enough {
			break
		}
		b.shift(low, high)
	}
	b.place()
	for j := range b.trial {
		b.trial[j] = float64(Micro(b.trial[j])) // the bound is taken at whole prices
	}
	b.predict()
}

// predict sets model to what the cuts say of the trial.
func (b *bundle) predict() {
	b.grad = grow(b.grad, len(b.cuts))
	high, _ := b.slopes()
	b.model = b.grad[high]
}

// place sets the trial to where the cuts with their shares pull it.
func (b *bundle) place() {
	for j := range b.trial {
		b.trial[j] = max(b.low[j], min(b.center[j]-b.sum[j]/b.spring, b.high[j]))
	}
}

// slopes finds the highest cut at the trial, and the lowest of those that have a share.
func (b *bundle) slopes() (high, low int) {
	low = None
	for i := range b.cuts {
		v := b.cuts[i].at(b.trial)
		b.grad[i] = v
		if v > b.grad[high] {
			high = i
		}
		if b.cuts[i].share > 0 && (low == None || v < b.grad[low]) {
			low = i
		}
	}
	return high, max(low, 0)
}

// shift moves as much share from one cut to another as levels them, or all there is.
func (b *bundle) shift(from, to int) {
	square := 0.0
	for j, g := range b.cuts[to].slope {
		d := g - b.cuts[from].slope[j]
		square += float64(d * d)
	}
	by := b.cuts[from].share
	if square > 0 {
		by = min(by, (b.grad[to]-b.grad[from])*b.spring/square)
	}
	b.cuts[from].share -= by
	b.cuts[to].share += by
	for j, g := range b.cuts[to].slope {
		b.sum[j] += float64(by * (g - b.cuts[from].slope[j]))
	}
}
