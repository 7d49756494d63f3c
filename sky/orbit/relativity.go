package orbit

import "math"

// DecayFromSeries returns dPb/dt from an orbital frequency and its derivative.
//
//	Ṗb = −f1/f0²
//
// Checked: TestDecayFromSeries
func DecayFromSeries(f0Hz, f1HzPerS float64) float64 { return -f1HzPerS / (f0Hz * f0Hz) }

// AdvanceGR returns the advance of periastron that general relativity predicts, deg/yr.
//
//	ω̇ = 3 n^(5/3) (T M)^(2/3)/(1−e²),  n = 2π/Pb, M the total mass
//
// Source:  Damour & Deruelle 1986
// Checked: TestGeneralRelativity
func AdvanceGR(pulsarMsun, companionMsun, periodDays, e float64) float64 {
	n := turn / (periodDays * secPerDay)
	rate := 3 * math.Pow(n, 5.0/3) * math.Pow(SunSec*(pulsarMsun+companionMsun), 2.0/3) / (1 - e*e)
	return rate / degToRad * daysPerYear * secPerDay
}

// DecayGR returns the orbital decay dPb/dt by gravitational radiation, s/s.
//
//	Ṗb = −(192π/5)(n T)^(5/3) f(e) m₁ m₂ M^(−1/3),  f = (1 + 73e²/24 + 37e⁴/96)/(1−e²)^(7/2)
//
// Source:  Peters 1964, Phys. Rev. 136, B1224
// Checked: TestGeneralRelativity
func DecayGR(pulsarMsun, companionMsun, periodDays, e float64) float64 {
	n := turn / (periodDays * secPerDay)
	e2 := e * e
	f := (1 + 73.0/24*e2 + 37.0/96*e2*e2) / math.Pow(1-e2, 3.5)
	return -192 * math.Pi / 5 * math.Pow(n*SunSec, 5.0/3) * f * pulsarMsun * companionMsun / math.Cbrt(pulsarMsun+companionMsun)
}

// EinsteinSec returns the amplitude of the Einstein delay, seconds.
//
//	γ = e n^(−1/3) T^(2/3) M^(−4/3) m₂ (m₁ + 2 m₂)
//
// Source:  Damour & Deruelle 1986
// Checked: TestGeneralRelativity
func EinsteinSec(pulsarMsun, companionMsun, periodDays, e float64) float64 {
	n := turn / (periodDays * secPerDay)
	m := pulsarMsun + companionMsun
	return e * math.Pow(SunSec, 2.0/3) / math.Cbrt(n) / math.Pow(m, 4.0/3) * companionMsun * (pulsarMsun + 2*companionMsun)
}

// EinsteinGR returns the amplitude of the Einstein delay that general relativity predicts for the orbit from the
// companion's mass and the inclination, seconds: the pulsar's mass follows from the size of the orbit.
//
// Returns: 0 where mass or inclination is not known (0), or where they leave the pulsar no mass
// Checked: TestEinsteinFromTheOrbit
func (o Orbit) EinsteinGR(companionMsun, sinI float64) float64 {
	pulsar := PulsarMsun(MassFunctionMsun(o.SemimajorLs, o.PeriodDays), companionMsun, sinI)
	if !(pulsar > 0) || math.IsInf(pulsar, 0) {
		return 0
	}
	return EinsteinSec(pulsar, companionMsun, o.PeriodDays, o.Eccentricity)
}

// LargestEinsteinSec is the largest amplitude of the Einstein delay, seconds, that is taken for possible in an orbit: that of a
// companion of 100 solar masses.
func LargestEinsteinSec(periodDays, e float64) float64 { return EinsteinSec(1.4, 100, periodDays, e) }

// MassFunctionMsun returns (m₂ sin i)³/M² from the size and period of the orbit.
//
//	4π² x³/(T Pb²)
//
// Checked: TestMassFunction
func MassFunctionMsun(semimajorLs, periodDays float64) float64 {
	n := turn / (periodDays * secPerDay)
	return n * n * semimajorLs * semimajorLs * semimajorLs / SunSec
}

// PulsarMsun returns the pulsar's mass from the companion's and the inclination.
//
//	m₁ = √[(m₂ sin i)³/f] − m₂
//
// Given:   a mass function > 0, companionMsun ≥ 0, 0 ≤ sinI ≤ 1
// Returns: below 0 where the three contradict one another: the orbit is too large for such a companion
// Checked: TestEinsteinFromTheOrbit
func PulsarMsun(massFunctionMsun, companionMsun, sinI float64) float64 {
	return math.Sqrt(math.Pow(companionMsun*sinI, 3)/massFunctionMsun) - companionMsun
}

// CompanionMsun returns the companion's mass for a pulsar of given mass and an inclination of which
// the sine is given: the minimum mass with sinI = 1.
//
// Given:   a mass function ≥ 0, pulsarMsun > 0, 0 < sinI ≤ 1
// Returns: the root of (m₂ sin i)³ = f (m₁+m₂)², by bisection on a function that grows
// Checked: TestMassFunction
func CompanionMsun(massFunctionMsun, pulsarMsun, sinI float64) float64 {
	over := func(m float64) bool {
		return math.Pow(m*sinI, 3) > massFunctionMsun*square(pulsarMsun+m)
	}
	if !(massFunctionMsun > 0) || !(sinI > 0) {
		return 0
	}
	low, high := 0.0, 1.0
	for !over(high) && high < 1e9 {
		low, high = high, 2*high
	}
	for range 60 {
		if mid := (low + high) / 2; over(mid) {
			high = mid
		} else {
			low = mid
		}
	}
	return (low + high) / 2
}
