package radiometer

import "math"

// DispersionConstant is the delay of a dispersion measure of 1 pc/cm³ at 1 MHz, seconds.
const DispersionConstant = 4.148808e3

// EphemerisDispersionConstant is the one that published dispersion measures are fitted with by convention,
// 1/2.41e-4: a delay worked out from a published value needs it where 1e-4 of the delay matters.
const EphemerisDispersionConstant = 1 / 2.41e-4

// ChannelSmearingUs returns by how much dispersion widens a pulse across one channel, µs.
//
//	8.3 µs DM Δf/f³,  Δf in MHz, f in GHz
//
// Given:   the width of the channel and its frequency in MHz
// Source:  Lorimer & Kramer 2005, Handbook of Pulsar Astronomy, with the coefficient that is printed there (2 K is 8.298)
// Checked: TestDispersion
func ChannelSmearingUs(dmPcPerCm3, channelMHz, mhz float64) float64 {
	ghz := mhz / 1000
	return 8.3 * dmPcPerCm3 * channelMHz / (ghz * ghz * ghz)
}

// DispersionSec returns the delay against infinite frequency, seconds.
//
//	K DM/f²
//
// Source:  Lorimer & Kramer 2005, Handbook of Pulsar Astronomy
// Checked: TestDispersion
func DispersionSec(dmPcPerCm3, mhz float64) float64 {
	return DispersionConstant * dmPcPerCm3 / (mhz * mhz)
}

// PairDMError returns the error of the dispersion measure from arrival times with two receivers, pc/cm³.
//
//	√(s₁²+s₂²)/(K |f₁⁻²−f₂⁻²|)
//
// Given:   frequencies in MHz, errors in µs
// Returns: infinite when the frequencies are equal
// Checked: TestPairs
func PairDMError(f1MHz, s1Us, f2MHz, s2Us float64) float64 {
	return math.Hypot(s1Us, s2Us) * 1e-6 / (DispersionConstant * math.Abs(1/square(f1MHz)-1/square(f2MHz)))
}

// PairErrorUs returns the error of the arrival time at infinite frequency that two receivers give
// together, µs: the number by which pairs are ranked, lowest first.
//
//	√(f₁⁴ s₁² + f₂⁴ s₂²)/|f₁² − f₂²|
//
// Returns: infinite when the frequencies are equal
// Checked: TestPairs
func PairErrorUs(f1MHz, s1Us, f2MHz, s2Us float64) float64 {
	a, b := square(f1MHz), square(f2MHz)
	return math.Hypot(a*s1Us, b*s2Us) / math.Abs(a-b)
}

// WindDensity is the usual density of the solar wind's electrons at 1 au, cm⁻³ (published: 4 to 10).
const WindDensity = 7.9

// WindUnreliableDeg is the elongation within which the solar wind's structure leaves as much as its smooth part takes away:
// timing there is flagged. What it leaves is WindResidualUs.
//
// Source:  Tiburzi et al. 2019, MNRAS 487, 394: residuals of up to 0.3 µs at 1400 MHz
// Checked: TestSolarWindIsUnreliable (DIS-070)
const WindUnreliableDeg = 20

// WindResidualUs returns how far arrival times within WindUnreliableDeg of the Sun may be off once the mean solar wind is
// taken out, µs: the largest scatter that published fits of a spherical wind were left with.
//
//	0.3 µs (1400 MHz/f)²
//
// Source:  Tiburzi et al. 2019, MNRAS 487, 394
// Checked: TestSolarWindIsUnreliable (DIS-070)
func WindResidualUs(mhz float64) float64 { return 0.3 * square(1400/mhz) }

// SolarWindDM returns the dispersion measure of the solar wind, pc/cm³.
//
//	n₀ au (π − ε)/sin ε
//
// Given:    density at 1 au in cm⁻³; elongation from the Sun within 0..180, degrees
// Returns:  infinite at 0
// Neglects: the wind's structure: wrong by up to 0.3 µs at 1400 MHz, and useless within about 20°
// Source:   Edwards, Hobbs & Manchester 2006, MNRAS 372, 1549
// Checked:  TestSolarWind
func SolarWindDM(densityPerCm3, elongationDeg float64) float64 {
	const auPc = 149597870700 / 3.0856775815e16
	eps := elongationDeg * math.Pi / 180
	if math.Pi-eps < 1e-9 {
		return densityPerCm3 * auPc // the limit
	}
	return densityPerCm3 * auPc * (math.Pi - eps) / math.Sin(eps)
}

// pairDMDrift is the change of dispersion that two visits of a pair may have between them, pc/cm³: the
// upper end of what the interstellar medium does in a week.
const pairDMDrift = 1e-4

// PairSpacingDays tightens the allowed spacing of the visits of a pair near the Sun, where the wind's
// dispersion changes from hour to hour. The Sun moves by about a degree a day.
//
// Given:   the spacing wanted far from the Sun, days; elongation, degrees
// Returns: the spacing in which the wind's dispersion changes by at most 1e-4 pc/cm³, if that is less
// Checked: TestPairSpacing
func PairSpacingDays(wantedDays, elongationDeg float64) float64 {
	if !(elongationDeg > 0) {
		return 0
	}
	const degPerDay = 360 / 365.25
	near := math.Max(elongationDeg-0.5, elongationDeg/2)
	slope := (SolarWindDM(WindDensity, near) - SolarWindDM(WindDensity, near+1)) * degPerDay
	if !(slope > 0) {
		return wantedDays
	}
	return math.Min(wantedDays, pairDMDrift/slope)
}
