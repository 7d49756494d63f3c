package main

import "time"

// A chapter is one file of sources.
type chapter struct {
	name string
	head string
}

var chapters = []chapter{
	{"slow", "Slow pulsars: bright, patient, cheap. A dozen minutes now and then keep every turn counted, and an\n" +
		"old pulsar that glitches after all is worth the trouble."},
	{"young", "Young pulsars: they spin down fast, wander, and glitch. When one has glitched its old ephemeris is void\n" +
		"and the pulse count has to be won again from close visits that may slowly spread out."},
	{"millisecond", "Millisecond pulsars: the clocks of the campaign. Each wants both receivers within a few days of one\n" +
		"another, since the dispersion changes and one band alone cannot tell."},
	{"new", "Newly found pulsars: the ephemeris is poor, and the next visit must come before the number of turns since\n" +
		"the last one becomes a guess. The sigmas below say how soon that is."},
	{"binaries", "Binaries: here it matters when one looks, not only how long. Orbits run from an hour and a half to\n" +
		"150 days; their sizes obey the mass function, and where the advance of periastron or the decay of an\n" +
		"orbit is given it is what general relativity asks of the invented masses."},
	{"calibrators", "Calibrators: strong steady sources. One flux and one polarisation check for each receiver belong\n" +
		"to every session in which they can be had."},
}

// Short forms for the aims that many sources share.

func paired(everyDays, pairDays, minutes float64) aim {
	return aim{kind: "cadence", everyDays: everyDays, receivers: []string{"L", "U"}, pairDays: pairDays, minutes: minutes}
}

func single(everyDays, minutes float64, rx string) aim {
	return aim{kind: "cadence", everyDays: everyDays, receivers: []string{rx}, minutes: minutes}
}

func coverage(bins, perBin int, since string) aim {
	return aim{kind: "phase coverage", receivers: []string{"L"}, bins: bins, perBin: perBin, since: since}
}

func connect(turns float64, rx string) aim {
	return aim{kind: "connect", maxPhase: turns, receivers: []string{rx}}
}

func measure(parameter string, percent float64, comment string) aim {
	return aim{kind: "measure", parameter: parameter, goalPercent: percent, receivers: []string{"L"}, comment: comment}
}

func calibrate(minutes float64, rx string) aim {
	return aim{kind: "calibration", receivers: []string{rx}, perSession: 1, minutes: minutes}
}

func (a aim) noted(comment string) aim { a.comment = comment; return a }

func (a aim) gap(days float64) aim { a.minGap = days; return a }

func (a aim) forgiving(carry float64) aim { a.carry = carry; return a }

func (a aim) atLeast(fraction float64) aim { a.minFrac = fraction; return a }

func (a aim) atMost(minutes float64) aim { a.maxMinutes = minutes; return a }

func (a aim) growing(from string, firstDays, factor float64) aim {
	a.ramp = &ramp{from, firstDays, factor}
	return a
}

// precise asks for a TOA error instead of minutes; the minutes stay behind as what it should come to.
func (a aim) precise(toaUs float64) aim { a.toaUs = toaUs; return a }

func on(year int, month time.Month, day, hour, minute int) time.Time {
	return time.Date(year, month, day, hour, minute, 0, 0, time.UTC)
}

// The scenario: right ascensions crowd at 17 to 20 hours, where the Milky Way is thickest, so that
// sidereal time is short there; a second, broader crowd fills the winter night.
var sketches = []sketch{
	// slow
	{chapter: "slow", role: "Bright and high in the winter night: always an easy quarter of an hour.",
		raH: 3.82, decDeg: 51.4, priority: 1, periodS: 0.762, slowdown: 2.1e-15, dm: 44, mjy: 6.2, index: -1.7, duty: 0.030,
		aims: []aim{single(28, 12, "L"), connect(0.2, "L")}},
	{chapter: "slow", role: "Weak sister of the one before; it needs the longer visit.",
		raH: 6.35, decDeg: 8.8, priority: 0.8, periodS: 1.214, slowdown: 4.4e-16, dm: 71, mjy: 1.3, index: -1.5, duty: 0.041,
		aims: []aim{single(35, 20, "L"), connect(0.2, "L")}},
	{chapter: "slow", role: "Steep spectrum: only worth having with the U receiver.",
		raH: 9.14, decDeg: 12.6, priority: 1, periodS: 0.418, slowdown: 9.0e-16, dm: 17, mjy: 1.1, index: -2.6, duty: 0.026,
		aims: []aim{single(28, 12, "U"), connect(0.2, "U")}},
	{chapter: "slow", role: "Spring sky, seen in the second half of the night.",
		raH: 11.61, decDeg: 37.2, priority: 0.8, periodS: 0.655, slowdown: 1.3e-15, dm: 24, mjy: 3.4, index: -1.8, duty: 0.035,
		aims: []aim{single(30, 12, "L"), connect(0.2, "L")}},
	{chapter: "slow", role: "Circumpolar: never sets at Corvane, so it fills gaps at any hour.",
		raH: 13.42, decDeg: 79.6, priority: 0.7, periodS: 0.351, slowdown: 3.2e-16, dm: 29, mjy: 2.7, index: -1.4, duty: 0.028,
		aims: []aim{single(21, 12, "L"), connect(0.2, "L")}},
	{chapter: "slow", role: "Lowest priority in the most crowded part of the sky: it loses to its neighbours every time and is\n" +
		"badly overdue. More time at 19 hours of sidereal time would be needed to keep it.",
		raH: 19.12, decDeg: 20.7, priority: 0.5, periodS: 0.571, slowdown: 5.8e-15, dm: 139, mjy: 0.9, index: -1.5, duty: 0.044,
		aims: []aim{single(21, 35, "L"), connect(0.25, "L")}},
	{chapter: "slow", role: "Long period, sharp pulse; circumpolar in the northern Milky Way.",
		raH: 20.35, decDeg: 61.1, priority: 0.8, periodS: 1.883, slowdown: 7.4e-15, dm: 93, mjy: 2.2, index: -1.9, duty: 0.012,
		aims: []aim{single(28, 15, "L"), connect(0.2, "L")}},
	{chapter: "slow", role: "Autumn evening source.",
		raH: 22.93, decDeg: 33.3, priority: 0.9, periodS: 0.944, slowdown: 1.1e-15, dm: 38, mjy: 4.5, index: -1.6, duty: 0.033,
		aims: []aim{single(28, 12, "L"), connect(0.2, "L")}},
	{chapter: "slow", role: "Far in the south: it never rises at Corvane. It stays in the list because the campaign inherited it, and\n" +
		"to show what the program says about a source that cannot be had.",
		raH: 6.21, decDeg: -57.3, priority: 0.5, periodS: 0.533, slowdown: 2.0e-15, dm: 52, mjy: 5.1, index: -1.6, duty: 0.030,
		aims: []aim{single(60, 15, "L")}},

	// young
	{chapter: "young", role: "Glitched on 28 November 2026. There has been one visit since, and its pulse count runs out before the session\n" +
		"of 12 December: back as often as can be, then at growing intervals.",
		raH: 23.08, decDeg: 57.2, priority: 4, periodS: 0.1117, slowdown: 2.6e-14, dm: 168, mjy: 1.9, index: -1.4, duty: 0.048,
		sigmas: &spinSigmas{61374.5, 0.004, 1.2e-7, 2e-14}, positions: [2]float64{120, 140}, glitchMJD: 61372.41,
		aims: []aim{single(14, 20, "L").growing("2026-11-28", 1, 1.5).gap(0.5).noted("daily after the glitch, a factor 1.5 longer each time"), connect(0.1, "L")}},
	{chapter: "young", role: "Restless rotation but no glitch yet: every ten days, so that one would not be missed by long.",
		raH: 19.74, decDeg: 26.4, priority: 2, periodS: 0.2143, slowdown: 1.9e-14, dm: 201, mjy: 1.6, index: -1.3, duty: 0.037,
		sigmas: &spinSigmas{61240, 0.006, 9e-10, 3e-16}, positions: [2]float64{200, 260},
		aims: []aim{single(10, 15, "L"), connect(0.1, "L")}},
	{chapter: "young", role: "Young and fast, low in the south; its last glitch was long ago.",
		raH: 6.93, decDeg: -11.6, priority: 1.8, periodS: 0.0863, slowdown: 5.2e-14, dm: 128, mjy: 1.2, index: -1.2, duty: 0.051,
		sigmas: &spinSigmas{61210, 0.005, 1.1e-9, 5e-16}, positions: [2]float64{90, 170}, glitchMJD: 59214.6,
		aims: []aim{single(14, 20, "L"), connect(0.1, "L")}},

	// millisecond
	{chapter: "millisecond", role: "One of the best clocks, and well kept: the standard by which others are judged.",
		raH: 0.62, decDeg: 12.3, priority: 4, periodS: 0.00371, slowdown: 1.2e-20, dm: 14, mjy: 2.4, index: -1.7, duty: 0.035, floorUs: 0.05,
		pmMas: 9, parallax: 1.1, aims: []aim{paired(14, 2, 30).gap(4), measure("parallax", 10, "")}},
	{chapter: "millisecond", role: "Faint but narrow; like two others it asks for a timing error rather than for minutes.",
		raH: 1.73, decDeg: 44.8, priority: 2.5, periodS: 0.00512, slowdown: 8.4e-21, dm: 31, mjy: 0.9, index: -1.5, duty: 0.030,
		pmMas: 5, aims: []aim{single(21, 30, "L").precise(1.8).atMost(60)}},
	{chapter: "millisecond", role: "South of the equator: less air and fewer minutes are not to be had.",
		raH: 2.55, decDeg: -8.4, priority: 2.5, periodS: 0.00443, slowdown: 1.5e-20, dm: 22, mjy: 1.3, index: -1.8, duty: 0.045,
		pmMas: 14, aims: []aim{paired(14, 3, 25)}},
	{chapter: "millisecond", role: "Grazes the southern skyline: under two hours a day above the limit, and never higher than ten degrees.\n" +
		"Only a session that holds its transit can serve it, and through so much air it takes twice the minutes.",
		raH: 3.36, decDeg: -35.5, priority: 1.5, periodS: 0.00531, slowdown: 1.1e-20, dm: 19, mjy: 1.9, index: -1.6, duty: 0.052,
		pmMas: 7, aims: []aim{single(30, 25, "L").atMost(90)}},
	{chapter: "millisecond", role: "Winter zenith: passes so high that the mount must leave it for a few minutes at transit.",
		raH: 4.28, decDeg: 43.1, priority: 3, periodS: 0.00287, slowdown: 1.8e-20, dm: 58, mjy: 1.1, index: -1.9, duty: 0.048,
		pmMas: 4, aims: []aim{paired(14, 2, 30)}},
	{chapter: "millisecond", role: "Equatorial, broad pulse, plenty of flux.",
		raH: 5.85, decDeg: -3.1, priority: 2, periodS: 0.00622, slowdown: 2.2e-20, dm: 41, mjy: 2.8, index: -1.6, duty: 0.095,
		pmMas: 6, aims: []aim{paired(21, 3, 20)}},
	{chapter: "millisecond", role: "Second best clock of the winter sky; weekly in L, because the array's sum gains most from it.",
		raH: 7.05, decDeg: 28.7, priority: 3.5, periodS: 0.00318, slowdown: 6.6e-21, dm: 33, mjy: 1.8, index: -1.6, duty: 0.028, floorUs: 0.04,
		pmMas: 11, parallax: 0.8, aims: []aim{single(7, 30, "L").precise(0.46).gap(2), single(21, 25, "U")}},
	{chapter: "millisecond", role: "Circumpolar millisecond pulsar; easy at any season.",
		raH: 8.33, decDeg: 61.2, priority: 2, periodS: 0.00491, slowdown: 1.3e-20, dm: 26, mjy: 1.0, index: -1.7, duty: 0.042,
		pmMas: 8, aims: []aim{paired(21, 3, 25)}},
	{chapter: "millisecond", role: "Low in the south; the U receiver hears it best.",
		raH: 9.72, decDeg: -17.8, priority: 0.9, periodS: 0.00805, slowdown: 3.1e-20, dm: 47, mjy: 1.2, index: -2.2, duty: 0.060,
		pmMas: 19, aims: []aim{paired(28, 4, 25)}},
	{chapter: "millisecond", role: "Fast, sharp and a little faint: long visits or none.",
		raH: 11.27, decDeg: 5.6, priority: 1.2, periodS: 0.00245, slowdown: 9.9e-21, dm: 18, mjy: 0.8, index: -1.4, duty: 0.055,
		pmMas: 17, aims: []aim{paired(21, 3, 40).atLeast(0.7)}},
	{chapter: "millisecond", role: "Spring sky; scintillates so strongly that a visit is a lottery ticket.",
		raH: 12.92, decDeg: 27.1, priority: 2, periodS: 0.00568, slowdown: 1.0e-20, dm: 9, mjy: 1.5, index: -1.7, duty: 0.050,
		pmMas: 13, aims: []aim{paired(14, 2, 20).forgiving(0.3)}},
	{chapter: "millisecond", role: "Summer morning source, moderately bright.",
		raH: 14.61, decDeg: -6.9, priority: 2.5, periodS: 0.00336, slowdown: 1.6e-20, dm: 29, mjy: 1.4, index: -1.6, duty: 0.046,
		pmMas: 6, aims: []aim{paired(21, 3, 30)}},
	{chapter: "millisecond", role: "High declination for its right ascension: above the limits 15 hours a day.",
		raH: 16.38, decDeg: 39.3, priority: 3, periodS: 0.00402, slowdown: 7.7e-21, dm: 24, mjy: 1.6, index: -1.8, duty: 0.034,
		pmMas: 5, parallax: 0.9, aims: []aim{paired(14, 2, 25)}},
	{chapter: "millisecond", role: "Close to the ecliptic: the Sun passes it in the middle of December, and no plan may point there then.",
		raH: 17.33, decDeg: -20.4, priority: 3, periodS: 0.00294, slowdown: 2.0e-20, dm: 63, mjy: 1.9, index: -1.5, duty: 0.039,
		pmMas: 7, sunLimit: 8, aims: []aim{paired(14, 2, 30)}},
	{chapter: "millisecond", role: "Crowded summer Milky Way, first of six that want the same sidereal hours.",
		raH: 18.07, decDeg: 9.4, priority: 3, periodS: 0.00353, slowdown: 1.4e-20, dm: 54, mjy: 1.2, index: -1.7, duty: 0.044,
		pmMas: 4, aims: []aim{paired(14, 2, 30)}},
	{chapter: "millisecond", role: "Northern neighbour in the crowd, with room to move to later hours.",
		raH: 18.45, decDeg: 46.3, priority: 2, periodS: 0.00587, slowdown: 1.9e-20, dm: 37, mjy: 1.1, index: -1.6, duty: 0.050,
		pmMas: 9, aims: []aim{paired(21, 3, 25)}},
	{chapter: "millisecond", role: "Behind the inner Milky Way; the sky there is hot, so its own value is given.",
		raH: 18.62, decDeg: -12.7, priority: 2, periodS: 0.00711, slowdown: 2.7e-20, dm: 148, mjy: 2.3, index: -1.4, duty: 0.080, skyK: 310,
		pmMas: 3, aims: []aim{single(14, 25, "L").precise(6)}},
	{chapter: "millisecond", role: "The best clock of the summer sky, hard to give what it deserves.",
		raH: 19.27, decDeg: 14.9, priority: 4, periodS: 0.00261, slowdown: 5.9e-21, dm: 36, mjy: 1.7, index: -1.8, duty: 0.036, floorUs: 0.05,
		pmMas: 6, parallax: 0.7, aims: []aim{paired(10, 2, 30).gap(3), measure("parallax", 10, "")}},
	{chapter: "millisecond", role: "Evening source in December, gone by eight.",
		raH: 20.83, decDeg: -4.8, priority: 2.5, periodS: 0.00466, slowdown: 1.7e-20, dm: 27, mjy: 1.3, index: -1.7, duty: 0.041,
		pmMas: 12, aims: []aim{paired(14, 2, 25)}},
	{chapter: "millisecond", role: "Southern autumn source; culminates at 24 degrees.",
		raH: 23.48, decDeg: -22.4, priority: 2, periodS: 0.00391, slowdown: 1.2e-20, dm: 12, mjy: 1.6, index: -1.6, duty: 0.047,
		pmMas: 22, aims: []aim{paired(21, 3, 25)}},

	// new
	{chapter: "new", role: "Found on 9 November 2026 and seen once since, on the 11th. Without a visit on 3 December the count of its turns\n" +
		"is a guess by the session of 7 December.",
		raH: 2.21, decDeg: 18.9, priority: 3, periodS: 0.00472, slowdown: 1.5e-20, dm: 45, mjy: 0.7, index: -1.8, duty: 0.060,
		sigmas: &spinSigmas{61356, 0.012, 4.7e-8, 1e-14}, positions: [2]float64{60, 85}, found: on(2026, 11, 9, 0, 0), missed: on(2026, 11, 14, 0, 0),
		aims: []aim{single(28, 30, "L").growing("2026-11-09", 2, 1.6).gap(0.5).noted("gaps that grow as the ephemeris does"), connect(0.1, "L")}},
	{chapter: "new", role: "Found on 8 November 2026 at the edge of a beam, and seen twice. Slow enough to be in no hurry before Christmas: the count\n" +
		"of its turns holds until the session of 30 December. Its position is known only to a quarter of an arcsecond.",
		raH: 7.92, decDeg: -9.3, priority: 2.5, periodS: 0.02531, slowdown: 3.8e-18, dm: 88, mjy: 0.6, index: -1.6, duty: 0.045,
		sigmas: &spinSigmas{61366, 0.015, 2.1e-8, 1.45e-14}, positions: [2]float64{250, 310}, found: on(2026, 11, 8, 0, 0), missed: on(2026, 11, 18, 0, 0),
		aims: []aim{single(28, 30, "L").growing("2026-11-08", 2, 1.6).gap(0.5), connect(0.1, "L")}},

	// binaries
	{chapter: "binaries", role: "An hour and a half around a wisp of a companion, whose wind hides the pulsar for a sixth of every orbit.\n" +
		"Egress trails: the eclipse is centred a little after superior conjunction.",
		raH: 4.92, decDeg: 47.6, priority: 2, raised: 5, periodS: 0.00198, slowdown: 1.1e-20, dm: 39, mjy: 0.9, index: -2.0, duty: 0.055, pmMas: 6,
		orbit: &orbitSketch{periodDays: 0.0638, m1: 1.5, m2: 0.024, sinI: 0.93, sigmaPeriod: 1e-10, sigmaEpoch: 1e-6,
			eclipse: &eclipse{0.065, 0.258, 0.02}},
		aims: []aim{single(14, 30, "L"), coverage(12, 3, "2026-01-01").noted("the eclipsed bins can never be filled")}},
	{chapter: "binaries", role: "Ten and a half hours, light companion: one long evening sees the whole orbit.",
		raH: 20.97, decDeg: 21.7, priority: 2, periodS: 0.00274, slowdown: 1.4e-20, dm: 50, mjy: 1.2, index: -1.7, duty: 0.048, pmMas: 5,
		orbit: &orbitSketch{periodDays: 0.4373, m1: 1.55, m2: 0.21, sinI: 0.87, sigmaPeriod: 2e-10, sigmaEpoch: 1e-6},
		aims:  []aim{paired(14, 2, 25), coverage(10, 2, "2026-01-01")}},
	{chapter: "binaries", role: "Its orbit keeps step with the sidereal day, so that the same phases stand over Corvane for months and the\n" +
		"others are always below the horizon. The hole in its coverage closes only slowly.",
		raH: 10.21, decDeg: 31.4, priority: 2.2, periodS: 0.00345, slowdown: 9.2e-21, dm: 28, mjy: 1.3, index: -1.6, duty: 0.040, pmMas: 8,
		orbit: &orbitSketch{periodDays: 0.9969, exactPeriod: true, m1: 1.6, m2: 0.19, sinI: 0.81, sigmaPeriod: 1e-10, sigmaEpoch: 1e-6},
		aims:  []aim{paired(14, 2, 25), coverage(12, 2, "2025-05-01")}},
	{chapter: "binaries", role: "A day and a quarter, nearly circular, well behaved.",
		raH: 8.93, decDeg: 22.6, priority: 2, periodS: 0.00309, slowdown: 1.2e-20, dm: 35, mjy: 1.1, index: -1.8, duty: 0.043, pmMas: 10,
		orbit: &orbitSketch{periodDays: 1.274, m1: 1.5, m2: 0.18, sinI: 0.76, sigmaPeriod: 2e-10, sigmaEpoch: 1e-6},
		aims:  []aim{paired(21, 3, 25)}},
	{chapter: "binaries", role: "The edge-on one. At superior conjunction its pulses graze the companion and come some 20 microseconds\n" +
		"late: an hour and a half on either side tells the mass of both stars. Three of the ten coming sessions hold a\n" +
		"passage; to miss them would cost more than anything else in the list.",
		raH: 5.23, decDeg: 17.6, priority: 5, periodS: 0.00344, slowdown: 8.1e-21, dm: 30, mjy: 1.5, index: -1.6, duty: 0.032, floorUs: 0.04, pmMas: 7,
		orbit: &orbitSketch{periodDays: 3.1986, exactPeriod: true, m1: 1.62, m2: 0.24, sinI: 0.9995, massKnown: true, sinIKnown: true,
			sigmaPeriod: 2e-10, sigmaEpoch: 1e-6, conjunctionAt: on(2026, 12, 4, 0, 52)},
		aims: []aim{paired(14, 2, 25).gap(2),
			{kind: "conjunction", comment: "stay on it around superior conjunction", halfWidth: 0.02, wanted: 6, since: "2026-06-01", receivers: []string{"L"}},
			measure("companion mass", 3, "what the next hour adds to our knowledge of it")}},
	{chapter: "binaries", role: "Six days; fills the early evening.",
		raH: 0.13, decDeg: 36.9, priority: 2.2, periodS: 0.00421, slowdown: 1.3e-20, dm: 23, mjy: 1.4, index: -1.7, duty: 0.039, pmMas: 6,
		orbit: &orbitSketch{periodDays: 5.871, m1: 1.45, m2: 0.22, sinI: 0.88, sigmaPeriod: 1e-9, sigmaEpoch: 2e-6},
		aims:  []aim{paired(14, 2, 25), coverage(10, 3, "2025-05-01")}},
	{chapter: "binaries", role: "Twelve days, tilted, so the delay of its pulses behind the companion is broad and low. One passage in the\n" +
		"ten sessions: the night of 14 January.",
		raH: 7.62, decDeg: 9.7, priority: 2.5, periodS: 0.00377, slowdown: 1.0e-20, dm: 37, mjy: 1.6, index: -1.6, duty: 0.036, pmMas: 9,
		orbit: &orbitSketch{periodDays: 12.13, m1: 1.5, m2: 0.28, sinI: 0.972, massKnown: true, sinIKnown: true,
			sigmaPeriod: 2e-9, sigmaEpoch: 4e-6, conjunctionAt: on(2027, 1, 15, 1, 40)},
		aims: []aim{paired(14, 2, 25),
			{kind: "conjunction", halfWidth: 0.01, wanted: 4, since: "2026-01-01", receivers: []string{"L"}},
			measure("sin i", 1, "")}},
	{chapter: "binaries", role: "The relativistic one: two neutron stars, four hours, an orbit that turns by several degrees a year and shrinks.\n" +
		"Every phase of it is wanted.",
		raH: 6.42, decDeg: 38.2, priority: 4, periodS: 0.0247, slowdown: 1.9e-18, dm: 57, mjy: 1.3, index: -1.5, duty: 0.040, pmMas: 4,
		orbit: &orbitSketch{periodDays: 0.1721, e: 0.312, omegaDeg: 74, m1: 1.41, m2: 1.27, sinI: 0.89, massKnown: true, sinIKnown: true,
			advanceKnown: true, decayKnown: true, sigmaPeriod: 1e-10, sigmaEpoch: 1e-6},
		aims: []aim{single(14, 40, "L").atMost(250), coverage(16, 3, "2026-01-01"),
			measure("orbital decay", 2, "the orbit shrinks: the longer the span, the better"),
			measure("advance of periastron", 0.05, ""), connect(0.1, "L")}},
	{chapter: "binaries", role: "Massive white dwarf, seventeen hours, mildly eccentric.",
		raH: 1.12, decDeg: -12.6, priority: 2, periodS: 0.0291, slowdown: 1.2e-18, dm: 26, mjy: 1.5, index: -1.6, duty: 0.035, pmMas: 11,
		orbit: &orbitSketch{periodDays: 0.7113, e: 0.221, omegaDeg: 211, m1: 1.35, m2: 0.94, sinI: 0.71, advanceKnown: true,
			sigmaPeriod: 1e-9, sigmaEpoch: 3e-6},
		aims: []aim{single(21, 25, "L"), coverage(12, 2, "2026-01-01")}},
	{chapter: "binaries", role: "Double neutron star of eight days; only its advance of periastron will tell the masses.",
		raH: 15.47, decDeg: 22.8, priority: 2.5, periodS: 0.0412, slowdown: 2.4e-18, dm: 19, mjy: 1.0, index: -1.7, duty: 0.033, pmMas: 15,
		orbit: &orbitSketch{periodDays: 8.312, e: 0.441, omegaDeg: 128, m1: 1.39, m2: 1.21, sinI: 0.8, advanceKnown: true,
			sigmaPeriod: 5e-9, sigmaEpoch: 3e-6},
		aims: []aim{single(21, 30, "L"), measure("advance of periastron", 1, "")}},
	{chapter: "binaries", role: "Very eccentric: for one day in 44 it swings round its companion, and that day has been caught only once.\n" +
		"The session of 12 December begins with the next periastron.",
		raH: 18.93, decDeg: 4.1, priority: 2.5, periodS: 0.01134, slowdown: 4.2e-19, dm: 117, mjy: 1.4, index: -1.5, duty: 0.038, pmMas: 3,
		orbit: &orbitSketch{periodDays: 44.08, e: 0.873, omegaDeg: 302, m1: 1.42, m2: 0.83, sinI: 0.85, advanceKnown: true,
			sigmaPeriod: 2e-7, sigmaEpoch: 1e-6, periastronAt: on(2026, 12, 12, 15, 20)},
		aims: []aim{single(14, 30, "L"), coverage(12, 3, "2025-05-01")}},
	{chapter: "binaries", role: "Eccentric although it is a millisecond pulsar: 97 days, and nobody knows why.",
		raH: 21.61, decDeg: 51.3, priority: 2, periodS: 0.00312, slowdown: 1.1e-20, dm: 81, mjy: 1.2, index: -1.8, duty: 0.041, pmMas: 4,
		orbit: &orbitSketch{periodDays: 97.24, e: 0.552, omegaDeg: 17, m1: 1.6, m2: 0.31, sinI: 0.83, sigmaPeriod: 1e-7, sigmaEpoch: 5e-6},
		aims:  []aim{paired(21, 3, 25), coverage(12, 2, "2025-05-01")}},
	{chapter: "binaries", role: "The widest: 150 days. Not quite four orbits since the campaign began, so each phase has come round only a few\n" +
		"times, and an unlucky week cannot be made up until next year.",
		raH: 17.91, decDeg: 31.2, priority: 2, periodS: 0.00547, slowdown: 1.5e-20, dm: 33, mjy: 1.5, index: -1.6, duty: 0.046, pmMas: 7,
		orbit: &orbitSketch{periodDays: 149.6, m1: 1.5, m2: 0.34, sinI: 0.86, sigmaPeriod: 3e-7, sigmaEpoch: 2e-5},
		aims:  []aim{paired(21, 3, 25), coverage(15, 2, "2025-05-01")}},

	// calibrators
	{chapter: "calibrators", role: "Flux, winter half of the sky.", name: "C Larch",
		raH: 2.91, decDeg: 30.3, priority: 1, mjy: 14200, index: -0.78, aims: []aim{calibrate(5, "L"), calibrate(5, "U")}},
	{chapter: "calibrators", role: "Flux, summer half of the sky.", name: "C Rowan",
		raH: 15.12, decDeg: 52.7, priority: 1, mjy: 9800, index: -0.66, aims: []aim{calibrate(5, "L"), calibrate(5, "U")}},
	{chapter: "calibrators", role: "Polarisation, L.", name: "C Hazel",
		raH: 21.14, decDeg: 35.2, priority: 1, mjy: 6100, index: -0.52, aims: []aim{calibrate(8, "L")}},
	{chapter: "calibrators", role: "Polarisation, U.", name: "C Alder",
		raH: 8.61, decDeg: 25.3, priority: 1, mjy: 7300, index: -0.84, aims: []aim{calibrate(8, "U")}},
}
