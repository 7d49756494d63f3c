package main

// The observatory, invented. The dish has 60 m and an efficiency of six tenths: 0.6 A/(2k) is 0.61 K/Jy.

const (
	siteName         = "Corvane"
	siteLatitudeDeg  = 43.9480
	siteLongitudeDeg = 3.4170
	siteHeightM      = 834
	siteSunLimitDeg  = 6.0
	slewAzDegPerMin  = 20.0
	slewElDegPerMin  = 10.0
	settleMin        = 20.0 / 60
	overheadMin      = 1.5
	changeMin        = 6.0
)

var (
	siteElevationDeg = [2]float64{8, 86}

	// siteHorizonDeg is the skyline: Corvane Hill stands in the east.
	siteHorizonDeg = [][2]float64{{0, 5.0}, {45, 6.5}, {70, 12.0}, {95, 17.0}, {120, 11.0},
		{150, 5.5}, {210, 4.0}, {260, 7.0}, {300, 9.5}, {330, 6.0}}
)

type receiver struct {
	name    string
	comment string
	bandMHz [2]float64
	tsysK   float64
	opacity float64
	gain    float64
}

var receivers = []receiver{
	{"L", "the workhorse: most timing is done here", [2]float64{1220, 1500}, 26, 0.008, 0.61},
	{"U", "sees the dispersion change and the steep spectra; interference is worse", [2]float64{610, 890}, 38, 0.006, 0.58},
}

func receiverNamed(name string) receiver {
	for _, r := range receivers {
		if r.name == name {
			return r
		}
	}
	panic("no receiver is called " + name)
}
