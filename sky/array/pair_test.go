package array

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func drawTimed(t *rapid.T) []Timed {
	return rapid.SliceOfN(rapid.Custom(func(t *rapid.T) Timed {
		return Timed{rapid.Float64Range(0, 360).Draw(t, "ra"), rapid.Float64Range(-90, 90).Draw(t, "dec"), rapid.Float64Range(0.01, 100).Draw(t, "sigma")}
	}), 0, 12).Draw(t, "set")
}

// Against the sum as it is written, with angles by the haversine.
func TestPair(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		set := drawTimed(t)
		got := Pair(set)
		sum, near, count := 0.0, 0.0, 0
		for i := range set {
			for j := range i {
				p, q := set[i], set[j]
				h := math.Pow(math.Sin((p.DecDeg-q.DecDeg)/2*degToRad), 2) +
					math.Cos(p.DecDeg*degToRad)*math.Cos(q.DecDeg*degToRad)*math.Pow(math.Sin((p.RADeg-q.RADeg)/2*degToRad), 2)
				xi := 2 * math.Asin(math.Sqrt(math.Min(1, h))) / degToRad
				part := math.Pow(Correlation(xi)/(p.SigmaUs*q.SigmaUs), 2)
				sum += part
				if xi < FirstZeroDeg {
					near += part
				}
				count++
			}
		}
		if math.Abs(got.MeritPerUs2-math.Sqrt(sum)) > 1e-9*math.Sqrt(sum)+1e-12 || got.Count != count || got.Near > got.Count {
			t.Errorf("%+v, wanted a merit of %g from %d pairs", got, math.Sqrt(sum), count)
		}
		if math.Abs(got.NearShare*sum-near) > 1e-6*sum {
			t.Errorf("near pairs add %g, wanted %g", got.NearShare, near/sum)
		}
	})
}

// What is not timed counts for nothing; one more pulsar never takes anything away; half the errors are four times
// the merit.
func TestPairOfMore(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		set := drawTimed(t)
		was := Pair(set)
		untimed := append(append([]Timed{}, set...), Timed{SigmaUs: math.Inf(1)}, Timed{SigmaUs: 0}, Timed{SigmaUs: math.NaN()})
		if got := Pair(untimed); got != was {
			t.Errorf("%+v became %+v", was, got)
		}
		if got := Pair(append(append([]Timed{}, set...), Timed{10, 20, 1})); got.MeritPerUs2 < was.MeritPerUs2 {
			t.Errorf("%g fell to %g", was.MeritPerUs2, got.MeritPerUs2)
		}
		better := append([]Timed{}, set...)
		for i := range better {
			better[i].SigmaUs /= 2
		}
		if got := Pair(better).MeritPerUs2; math.Abs(got-4*was.MeritPerUs2) > 1e-9*got {
			t.Errorf("%g with half the errors, %g before", got, was.MeritPerUs2)
		}
	})
}
