package campaigns

import "time"

// A Campaign is what campaign.toml and the files it includes say, checked. Names are unique within
// their kind, and every name that refers to another entry has been found.
type Campaign struct {
	Name      string
	Sites     []Site
	Receivers []Receiver
	Sources   []Source
	Sessions  []Session // in order of their start
}

// A Site is a telescope and the ground it stands on.
type Site struct {
	Name                 string
	LatitudeDeg          float64 // geodetic, −90..90
	LongitudeDeg         float64 // east positive, −180..360
	HeightM              float64
	DUT1Sec              float64        // UT1 − UTC, seconds, within ±0.9; default 0
	TimeZone             *time.Location // for showing local times; default UTC
	ElevationLimitsDeg   [2]float64     // lowest and highest
	AzimuthTravelDeg     [2]float64     // cable wrap of an altazimuth mount: 0 is north, through east
	HourAngleLimitsDeg   [2]float64     // equatorial and transit mounts, west positive
	SlewDegPerMin        [2]float64     // azimuth and elevation, or hour angle and declination
	AccelerationDegPerS2 [2]float64     // likewise
	SettleSec            float64        // after every move
	SunLimitDeg          float64        // never point closer to the Sun than this
	HorizonDeg           [][2]float64   // azimuth, elevation: linear between, wraps round through north
	Mount                Mount
	Refraction           *Refraction // nil: limits hold for elevations without air, which is the rule
}

// Refraction is the air at a site. A site that has one counts its elevation limits and mask in elevations as they are
// seen through it, by radio.
type Refraction struct {
	PressureHPa  float64 // at the site, not reduced to sea level
	TemperatureC float64
	Humidity     float64 // relative, 0..1
}

// Mount says how a telescope moves.
type Mount string

// The mounts.
const (
	AltAz      Mount = "altaz"
	Equatorial Mount = "equatorial"
	Transit    Mount = "transit"
)

// A Receiver is a front end that can be brought into the beam of one site.
type Receiver struct {
	Name          string
	Site          string
	BandMHz       [2]float64 // lower and upper edge
	TsysK         float64    // at the zenith, without the sky
	ZenithOpacity float64    // nepers
	GainKPerJy    float64
	GainCurve     [][2]float64 // elevation, factor of GainKPerJy: linear between, flat outside; nil: 1 everywhere
	ChannelMHz    float64      // width of a channel within which dispersion is not taken out; 0: it is taken out everywhere
	Polarizations int
	ChangeMin     float64 // time to bring it into the beam
}

// A Source is a pulsar or a calibrator, with the reasons to observe it.
type Source struct {
	Name             string
	RADeg, DecDeg    float64    // ICRS at epoch PositionMJD
	PMMasPerYr       [2]float64 // in RA (times cos dec) and in Dec
	PositionMJD      float64    // epoch of the position; J2000.0 unless given
	Priority         float64    // above 0; default 1
	SigmaPositionMas [2]float64 // error of RA (times cos dec) and Dec
	ParallaxMas      float64
	Spin             *Spin
	DMPcPerCm3       float64
	Flux             *Flux
	Scintillation    *Scintillation
	WidthMs          float64 // W50 of the profile; 0 when not known
	Template         string  // GaussianTemplate, or empty: expected TOA errors by the plain rule W/(S/N)
	JitterUsPerHour  float64 // TOA error from pulse jitter after one hour
	JitterFraction   float64 // in its place where it was not measured: that of a single pulse over the pulse width; about 1/3
	FloorUs          float64 // TOA error that no amount of time goes below
	SkyK             float64 // sky temperature at 408 MHz; 0: from the model
	SunLimitDeg      float64 // stricter than the site's; 0: the site's
	GlitchMJD        float64 // date of the last glitch; 0: none
	Orbit            *Orbit
	Aims             []Aim
	File             string // where it stands: for messages
	Line             int
}

// GaussianTemplate is the Template of a source whose pulse is taken for a Gaussian and timed with the template that matches
// it: its expected TOA errors are the least that noise allows.
const GaussianTemplate = "gaussian"

// Spin is the rotation ephemeris.
type Spin struct {
	FrequencyHz           float64
	DerivativeHzPerS      float64
	EpochMJD              float64 // TDB
	SigmaFrequencyHz      float64
	SigmaDerivativeHzPerS float64
	SigmaPhaseTurns       float64
}

// Flux is the mean flux density and its spectrum.
type Flux struct {
	MJy           float64
	AtMHz         float64
	SpectralIndex float64
}

// Scintillation is how the interstellar medium makes the flux vary from visit to visit.
type Scintillation struct {
	Minutes float64 // time in which a scintle comes and goes
	MHz     float64 // its width in frequency
	AtMHz   float64 // frequency at which that holds
}

// Orbit is the ephemeris of a binary. Exactly one of the epochs is set (not zero). The period is from
// node to node (sidereal) with AscendingNodeMJD and from periastron to periastron (anomalistic) with
// PeriastronMJD.
type Orbit struct {
	PeriodDays       float64
	FrequencySeries  []float64 // orbital frequency and its derivatives, Hz, Hz/s ...: instead of the period, which is then 1/the first
	AscendingNodeMJD float64   // TDB
	PeriastronMJD    float64   // TDB
	SemimajorLs      float64   // projected, light-seconds
	Eccentricity     float64   // 0 ≤ e < 1
	PeriastronDeg    float64   // longitude of periastron of the pulsar's orbit
	AdvanceDegPerYr  float64
	Decay            float64 // dPb/dt, s/s
	CompanionMsun    float64 // 0: not known
	SinI             float64 // 0: not known
	EinsteinDelaySec float64 // amplitude γ; 0: that of general relativity where companion mass and sin i are known
	SigmaPeriodDays  float64
	SigmaEpochDays   float64
	SigmaSemimajorLs float64
	SigmaDecay       float64
	SigmaAdvance     float64 // deg/yr
	SigmaEinsteinSec float64
	DataMJD          [2]float64 // first and last observation behind the ephemeris; 0: not known
	Eclipse          *Eclipse
}

// Eclipse is the part of the orbit in which the pulsar is not heard.
type Eclipse struct {
	HalfWidthTurns float64 // at ReferenceMHz
	CentreTurns    float64 // orbital phase from the ascending node; superior conjunction, 0.25, unless given
	MarginTurns    float64 // on both sides: heard, but of no use for timing
	ReferenceMHz   float64 // 0: as wide at every frequency
	Index          float64 // width ∝ frequency^Index
}

// AimKind is a reason to observe a source.
type AimKind string

// The aims.
const (
	Cadence       AimKind = "cadence"
	PhaseCoverage AimKind = "phase coverage"
	Conjunction   AimKind = "conjunction"
	Measure       AimKind = "measure"
	Connect       AimKind = "connect"
	Calibration   AimKind = "calibration"
)

// An Aim is one reason to observe a source. Which fields may be set depends on the kind; Load refuses
// the others and fills in the defaults named here.
type Aim struct {
	Kind        AimKind
	Receivers   []string // never empty once loaded: every receiver of the campaign unless given
	Minutes     float64  // wanted per visit; 0 when ToaUs is given. Default: see Load
	ToaUs       float64  // wanted TOA error, µs: the minutes follow from the radiometer equation
	MinFraction float64  // a slot below this share of the wanted is no use; default 0.6
	MaxMinutes  float64  // longest slot that is wanted; default 2 × Minutes, 0 when these follow from ToaUs

	// cadence
	EveryDays  float64
	PairDays   float64 // receivers of one epoch lie within this; default: a seventh of every_days
	Carry      float64 // default 0.5
	MinGapDays float64 // default 0
	Ramp       *Ramp

	// conjunction, phase coverage
	HalfWidthTurns float64
	Wanted         int // passages
	Bins, PerBin   int
	Since          time.Time

	// measure
	Parameter   string // "companion mass", "sin i", "orbital decay", "advance of periastron", "einstein delay", "parallax", "proper motion", ...
	GoalPercent float64

	// connect
	MaxPhaseErrorTurns float64

	// calibration
	PerSession int // default 1
}

// A Ramp makes a cadence's interval grow geometrically, after a discovery or a glitch.
type Ramp struct {
	From      time.Time
	FirstDays float64
	Factor    float64
}

// A Session is telescope time that has been granted.
type Session struct {
	Name            string
	Site            string
	Start, End      time.Time // UTC, whole minutes
	Receivers       []string
	SlotOverheadMin float64
	Breaks          [][2]time.Time
}
