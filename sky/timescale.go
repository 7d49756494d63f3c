package sky

import (
	"math"
	"time"
)

const (
	j2000MJD       = 51544.5
	daysPerCentury = 36525
	mjdOffset      = 2400000.5
	secondsPerDay  = 86400
	unixEpochMJD   = 40587
)

// MJD returns the modified Julian date of t, in the scale t is in (UTC as a rule).
func MJD(t time.Time) float64 {
	return unixEpochMJD + float64(t.Unix())/secondsPerDay + float64(t.Nanosecond())/(secondsPerDay*1e9)
}

// TimeOfMJD returns the instant of a modified Julian date in UTC, to the microsecond that a float64 can
// hold. Dates outside the years 1 to 9999 are brought to the nearer end; NaN gives the zero time.
func TimeOfMJD(mjd float64) time.Time {
	if math.IsNaN(mjd) {
		return time.Time{}
	}
	mjd = min(max(mjd, -678575), 2973483)
	day := math.Floor(mjd)
	us := math.Round((mjd - day) * secondsPerDay * 1e6)
	return time.Unix((int64(day)-unixEpochMJD)*secondsPerDay, 0).Add(time.Duration(us) * time.Microsecond).UTC()
}

// leapSeconds is TAI − UTC from each date on.
// Source: IERS Bulletin C; none announced after 2017. A new one is a new line at the end.
var leapSeconds = [...]struct {
	fromMJD float64
	sec     float64
}{
	{41317, 10}, // 1972-01-01
	{41499, 11}, // 1972-07-01
	{41683, 12}, // 1973-01-01
	{42048, 13}, // 1974-01-01
	{42413, 14}, // 1975-01-01
	{42778, 15}, // 1976-01-01
	{43144, 16}, // 1977-01-01
	{43509, 17}, // 1978-01-01
	{43874, 18}, // 1979-01-01
	{44239, 19}, // 1980-01-01
	{44786, 20}, // 1981-07-01
	{45151, 21}, // 1982-07-01
	{45516, 22}, // 1983-07-01
	{46247, 23}, // 1985-07-01
	{47161, 24}, // 1988-01-01
	{47892, 25}, // 1990-01-01
	{48257, 26}, // 1991-01-01
	{48804, 27}, // 1992-07-01
	{49169, 28}, // 1993-07-01
	{49534, 29}, // 1994-07-01
	{50083, 30}, // 1996-01-01
	{50630, 31}, // 1997-07-01
	{51179, 32}, // 1999-01-01
	{53736, 33}, // 2006-01-01
	{54832, 34}, // 2009-01-01
	{56109, 35}, // 2012-07-01
	{57204, 36}, // 2015-07-01
	{57754, 37}, // 2017-01-01
}

// ttMinusTAI is TT − TAI in seconds, by definition.
const ttMinusTAI = 32.184

// TTMinusUTCSec returns TT − UTC in seconds at a UTC instant: 69.184 s since 2017. Before 1972 UTC ran
// at other rates; the value of 1972 is returned then.
func TTMinusUTCSec(t time.Time) float64 {
	mjd := MJD(t)
	for i := len(leapSeconds) - 1; i > 0; i-- {
		if mjd >= leapSeconds[i].fromMJD {
			return leapSeconds[i].sec + ttMinusTAI
		}
	}
	return leapSeconds[0].sec + ttMinusTAI
}

// TDBMinusTTSec returns TDB − TT in seconds.
//
//	0.001657 sin(628.3076 T + 6.2401) + six terms of 22 µs and less, T in Julian centuries since J2000.0
//
// Given:    MJD of TT (or UTC: the difference moves it by less than a nanosecond)
// Neglects: smaller terms and the place on the Earth, 10 µs in all
// Source:   Kaplan 2005, USNO Circular 179, eq. 2.6
// Checked:  TestTimeScales (AST-080)
func TDBMinusTTSec(mjd float64) float64 {
	t := (mjd - j2000MJD) / daysPerCentury
	return 0.001657*math.Sin(628.3076*t+6.2401) +
		0.000022*math.Sin(575.3385*t+4.2970) +
		0.000014*math.Sin(1256.6152*t+6.1969) +
		0.000005*math.Sin(606.9777*t+4.0212) +
		0.000005*math.Sin(52.9691*t+0.4444) +
		0.000002*math.Sin(21.3299*t+5.5431) +
		0.000010*t*math.Sin(628.3076*t+4.2490)
}

// jdTT returns the Julian day of TT at a UTC instant.
func jdTT(t time.Time) float64 {
	return MJD(t) + TTMinusUTCSec(t)/secondsPerDay + mjdOffset
}
