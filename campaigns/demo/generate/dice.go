package main

import (
	"hash/fnv"
	"math"
	"math/rand/v2"
)

// A dice is a stream of invented numbers. Its seed is a name, so that each source and each session has a
// stream of its own. Only the generator's raw bits are used: they are the same in every release of Go.
type dice struct{ bits *rand.PCG }

func newDice(name string) dice {
	h := fnv.New64a()
	h.Write([]byte("tallystick demonstration, " + name))
	seed := h.Sum64()
	return dice{rand.NewPCG(seed, seed^0x9e3779b97f4a7c15)}
}

// unit returns a number in [0, 1).
func (d dice) unit() float64 { return float64(d.bits.Uint64()>>11) / (1 << 53) }

// between returns a number in [low, high).
func (d dice) between(low, high float64) float64 { return low + (high-low)*d.unit() }

// near returns about, changed by up to the given share of itself.
func (d dice) near(about, share float64) float64 { return about * (1 + share*d.between(-1, 1)) }

// one picks one of the words.
func (d dice) one(words ...string) string { return words[int(d.unit()*float64(len(words)))] }

// normal returns a number from the standard normal distribution.
//
//	z = sqrt(-2 ln u) cos(2π v)
//
// Source: Box & Muller 1958
func (d dice) normal() float64 {
	u, v := 1-d.unit(), d.unit()
	return math.Sqrt(-2*math.Log(u)) * math.Cos(2*math.Pi*v)
}

// roundTo returns x with the given number of decimals, as it will be read back from the file.
func roundTo(x float64, decimals int) float64 {
	p := math.Pow(10, float64(decimals))
	return math.Round(x*p) / p
}

// roundFigures returns x with the given number of significant figures.
func roundFigures(x float64, figures int) float64 {
	if x == 0 {
		return 0
	}
	return roundTo(x, figures-1-int(math.Floor(math.Log10(math.Abs(x)))))
}
