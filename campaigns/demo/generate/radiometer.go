package main

import "math"

// skyK returns the sky temperature at a frequency, with the cosmic background.
//
//	T408 = 25 + 275/{[1+(l/42)²][1+(b/3)²]} K, times (f/408 MHz)^-2.55
//
// Source: Narayan 1987 for the sky at 408 MHz; a factor 1.5 is usual
func skyK(l, b, mhz float64) float64 {
	if l > 180 {
		l -= 360
	}
	t408 := 25 + 275/((1+l*l/1764)*(1+b*b/9))
	return 2.73 + t408*math.Pow(mhz/408, -2.55)
}

// lossesBeta is what digitisation and interference cost in S/N.
const lossesBeta = 1.1

// signal returns the S/N of a source at an elevation after so many minutes.
//
//	S/N = S G sqrt(n_p t B)/(β Tsys) sqrt((P-W)/W)
//
// Source: Lorimer & Kramer 2005
func signal(s source, rx receiver, elDeg, minutes float64) float64 {
	low, high := rx.bandMHz[0], rx.bandMHz[1]
	mhz := (low + high) / 2
	flux := s.mjy / 1000 * math.Pow(mhz/s.atMHz, s.index)
	airmass := 1 / math.Sin(elDeg*degrees)
	l, b := galacticDeg(s.position)
	through := math.Exp(-rx.opacity * airmass)
	tsys := rx.tsysK + skyK(l, b, mhz)*through + 270*(math.Exp(-rx.opacity)-through)
	share := s.widthMs / (s.periodS * 1000)
	return flux * through * rx.gain / (lossesBeta * tsys) *
		math.Sqrt(2*minutes*60*(high-low)*1e6) * math.Sqrt((1-share)/share)
}

// toaUs returns the error of a pulse arrival time: radiometer noise, jitter and floor.
//
//	σ² = (W/(S/N))² + σ_1h² (60 min/t) + floor²
func toaUs(s source, snr, minutes float64) float64 {
	noise := s.widthMs * 1000 / snr
	jitter := s.jitterUs * math.Sqrt(60/minutes)
	return math.Sqrt(noise*noise + jitter*jitter + s.floorUs*s.floorUs)
}
