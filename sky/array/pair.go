package array

import "math"

// A Timed is a pulsar with what its timing is good to.
type Timed struct {
	RADeg, DecDeg float64 // ICRS
	SigmaUs       float64 // error of its arrival times taken together; infinite: not timed
}

// Pairs are what a set of pulsars is worth to the search for a background.
type Pairs struct {
	MeritPerUs2 float64 // µs⁻²
	Count       int     // pairs of timed pulsars
	Near        int     // of them nearer to one another than FirstZeroDeg
	NearShare   float64 // what these add to the square of the merit, 0..1
}

// Pair returns the figure of merit of all pairs of a set: the signal-to-noise ratio of a weak background but for a
// factor that is the same for every set.
//
//	√(Σ Γ²/(σᵢ² σⱼ²)), over pairs i < j
//
// Given:    at least two timed pulsars, or it is 0; a SigmaUs that is not above 0 counts as not timed
// Neglects: the background's own part of the noise, which sets in as it is heard and makes pulsars count for more
// and errors for less
// Source:   Anholm et al. 2009, Phys. Rev. D 79, 084030; Siemens et al. 2013, CQG 30, 224015
// Checked:  TestPairRows, TestPair, TestPairOfMore
func Pair(set []Timed) Pairs {
	type placed struct{ x, y, z, info float64 }
	timed := make([]placed, 0, len(set))
	for _, p := range set {
		if info := 1 / (p.SigmaUs * p.SigmaUs); p.SigmaUs > 0 && info > 0 {
			sinA, cosA := math.Sincos(p.RADeg * degToRad)
			sinD, cosD := math.Sincos(p.DecDeg * degToRad)
			timed = append(timed, placed{cosD * cosA, cosD * sinA, sinD, info})
		}
	}
	sinHalf := math.Sin(FirstZeroDeg / 2 * degToRad)
	out, sum, near := Pairs{}, 0.0, 0.0
	for i, p := range timed {
		for _, q := range timed[i+1:] {
			dx, dy, dz := p.x-q.x, p.y-q.y, p.z-q.z
			c := math.Min(1, (dx*dx+dy*dy+dz*dz)/4) // the square of the sine of half the angle: good for small ones too
			gamma := correlation(c)
			part := gamma * gamma * p.info * q.info
			out.Count++
			sum += part
			if c < sinHalf*sinHalf {
				out.Near++
				near += part
			}
		}
	}
	out.MeritPerUs2 = math.Sqrt(sum)
	if sum > 0 {
		out.NearShare = near / sum
	}
	return out
}
