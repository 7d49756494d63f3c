package campaigns

import (
	"fmt"
	"slices"
	"strings"
)

// aimKinds are all kinds of aims.
var aimKinds = []string{string(Cadence), string(PhaseCoverage), string(Conjunction), string(Measure), string(Connect), string(Calibration)}

// Which keys belong to which kinds, beside those that every aim has.
var aimKeys = map[string][]AimKind{
	"every_days":            {Cadence},
	"pair_days":             {Cadence},
	"carry":                 {Cadence},
	"min_gap_days":          {Cadence},
	"ramp":                  {Cadence},
	"half_width_turns":      {Conjunction},
	"wanted":                {Conjunction},
	"bins":                  {PhaseCoverage},
	"per_bin":               {PhaseCoverage},
	"since":                 {Conjunction, PhaseCoverage},
	"parameter":             {Measure},
	"goal_percent":          {Measure},
	"max_phase_error_turns": {Connect},
	"per_session":           {Calibration},
}

// Parameters are what a measure aim can be about, in the words of campaign.toml.
var Parameters = []string{
	"companion mass", "sin i", "orbital decay", "advance of periastron", "einstein delay", "orbital period", "eccentricity",
	"semimajor axis", "parallax", "proper motion", "position", "spin frequency", "spin frequency derivative",
}

// orbitParameters are those of them that only a binary has.
var orbitParameters = Parameters[:8]

// defaults of an aim, for keys that are left out.
const (
	defaultMinFraction = 0.6
	defaultCarry       = 0.5
	longestVisitMin    = 48 * 60 // no session is longer
)

// aims reads the reasons to observe a source.
func (l *loader) aims(source *table, s *Source) []Aim {
	list := source.tables("aim")
	if len(list) == 0 && source.good("aim") {
		source.lack("no aim", "at least one [[source.aim]]: without a reason a source is never observed", "aim")
	}
	aims := make([]Aim, len(list))
	for i, t := range list {
		aims[i] = l.aim(t, source, s)
	}
	for i, t := range list {
		t.fillMinutes(&aims[i], aims, s)
		t.finishAim(&aims[i], source, s)
	}
	l.calibratorOnly(list, aims)
	return aims
}

func (l *loader) aim(t, source *table, s *Source) Aim {
	kind := AimKind(t.word("kind", aimKinds))
	if kind != "" {
		t.label += fmt.Sprintf(" (%s)", kind)
	}
	a := Aim{
		Kind:        kind,
		Receivers:   l.receiverNames(t, false),
		Minutes:     t.numberOr("minutes", between(1, longestVisitMin), 0),
		ToaUs:       t.numberOr("toa_us", above(0, 1e6), 0),
		MinFraction: t.numberOr("min_fraction", above(0, 1), defaultMinFraction),
		MaxMinutes:  t.numberOr("max_minutes", between(1, longestVisitMin), 0),
	}
	if len(a.Receivers) == 0 {
		for _, r := range l.campaign.Receivers {
			a.Receivers = append(a.Receivers, r.Name)
		}
	}
	switch a.Kind {
	case Cadence:
		t.cadence(&a)
	case PhaseCoverage:
		a.Bins = t.count("bins", 1, 360, true, 1)
		a.PerBin = t.count("per_bin", 1, 10000, true, 1)
		a.Since = t.day("since", true)
		t.needsOrbit(source, s)
	case Conjunction:
		a.HalfWidthTurns = t.number("half_width_turns", above(0, 0.5))
		a.Wanted = t.count("wanted", 1, 100000, true, 1)
		a.Since = t.day("since", true)
		t.needsOrbit(source, s)
	case Measure:
		a.Parameter = t.word("parameter", Parameters)
		a.GoalPercent = t.number("goal_percent", above(0, 100))
		if slices.Contains(orbitParameters, a.Parameter) {
			t.needsOrbit(source, s)
		}
		if t.good("parameter") {
			t.measurable(a.Parameter, source, s)
		}
	case Connect:
		a.MaxPhaseErrorTurns = t.number("max_phase_error_turns", above(0, 0.5))
		t.needsSpinError(source, s)
	case Calibration:
		a.PerSession = t.count("per_session", 1, 100, false, 1)
	}
	return a
}

func (t *table) cadence(a *Aim) {
	a.EveryDays = t.number("every_days", above(0, 4000))
	a.PairDays = t.numberOr("pair_days", above(0, 4000), a.EveryDays/7)
	a.Carry = t.numberOr("carry", between(0, 1), defaultCarry)
	a.MinGapDays = t.numberOr("min_gap_days", between(0, 4000), 0)
	if t.good("every_days", "pair_days") && a.PairDays > a.EveryDays {
		t.complain("pair_days", plainNumber(a.PairDays), "at most every_days, "+plainNumber(a.EveryDays), "")
	}
	if t.good("every_days", "min_gap_days") && a.MinGapDays > a.EveryDays {
		t.complain("min_gap_days", plainNumber(a.MinGapDays), "at most every_days, "+plainNumber(a.EveryDays), "")
	}
	a.Ramp = t.ramp(a.EveryDays)
}

func (t *table) ramp(everyDays float64) *Ramp {
	r := t.table("ramp", "ramp", false)
	if r == nil {
		return nil
	}
	ramp := &Ramp{
		From:      r.day("from", true),
		FirstDays: r.number("first_days", above(0, 4000)),
		Factor:    r.number("factor", above(1, 100)),
	}
	if t.good("every_days") && r.good("first_days") && ramp.FirstDays > everyDays {
		r.complain("first_days", plainNumber(ramp.FirstDays), "at most every_days, "+plainNumber(everyDays), "")
	}
	r.done(nil)
	t.passOn("ramp", r)
	return ramp
}

// without says that a key is truly missing: neither at fault nor misspelt.
func (t *table) without(key string) bool {
	_, misspelt := t.meantFor(key)
	return !t.has(key) && !misspelt
}

func (t *table) needsOrbit(source *table, s *Source) {
	if s.Orbit == nil && source.without("orbit") {
		t.complain("kind", "an aim that needs an orbit", "it only in a source with [source.orbit]", "")
	}
}

// measurable refuses to measure what a share of nothing is wanted of, and anything where no pulses are counted.
func (t *table) measurable(parameter string, source *table, s *Source) {
	if s.Spin == nil {
		if source.without("spin") {
			t.complain("kind", "an aim that needs the rotation", "it only in a source with spin", "")
		}
		return
	}
	o := s.Orbit
	if o == nil {
		o = &Orbit{}
	}
	decay := o.Decay != 0 || len(o.FrequencySeries) > 1
	values := map[string]struct {
		key   string
		known bool
	}{
		"companion mass":            {"companion_msun in its orbit", o.CompanionMsun > 0},
		"sin i":                     {"companion_msun and sin_i in its orbit", o.CompanionMsun > 0 && o.SinI > 0},
		"orbital decay":             {"decay in its orbit", decay},
		"advance of periastron":     {"advance_deg_per_yr in its orbit", o.AdvanceDegPerYr != 0},
		"einstein delay":            {"eccentricity and einstein_delay_s, or companion_msun and sin_i that fit its size, in its orbit", o.einsteinSec() > 0},
		"eccentricity":              {"eccentricity in its orbit", o.Eccentricity > 0},
		"parallax":                  {"parallax_mas", s.ParallaxMas > 0},
		"proper motion":             {"pm_mas_per_yr", s.PMMasPerYr != [2]float64{}},
		"position":                  {"sigma_position_mas", s.SigmaPositionMas[0] > 0 && s.SigmaPositionMas[1] > 0},
		"spin frequency derivative": {"derivative_hz_per_s in its spin", s.Spin.DerivativeHzPerS != 0},
	}
	if v, ok := values[parameter]; ok && !v.known && source.good("orbit", "spin", "parallax_mas", "pm_mas_per_yr", "sigma_position_mas") &&
		(s.Orbit != nil || !slices.Contains(orbitParameters, parameter)) {
		t.complain("parameter", fmt.Sprintf("%q", parameter), "it only in a source with "+v.key+": goal_percent is a share of that", "")
	}
}

// needsSpinError refuses to watch over a pulse count whose error is not known: it would look safe for ever.
func (t *table) needsSpinError(source *table, s *Source) {
	if s.Spin == nil && source.without("spin") || s.Spin != nil && s.Spin.SigmaFrequencyHz == 0 && source.good("spin") {
		t.complain("kind", "an aim that needs the error of the spin frequency", "it only in a source whose spin has sigma_frequency_hz above 0", "")
	}
}

// fillMinutes finds how long a visit of an aim is wanted when the aim itself does not say: as long as the
// source's first aim that does; for a conjunction the whole window, but no longer than twelve hours.
func (t *table) fillMinutes(a *Aim, aims []Aim, s *Source) {
	if t.has("minutes") || t.has("toa_us") || a.Kind == "" {
		return
	}
	if a.Kind == Conjunction && s.Orbit != nil {
		a.Minutes = min(max(1, 2*a.HalfWidthTurns*s.Orbit.PeriodDays*1440), 12*60)
		return
	}
	if a.Kind != Calibration {
		for _, other := range aims {
			if other.Kind != Conjunction && other.Kind != Calibration && (other.Minutes > 0 || other.ToaUs > 0) {
				a.Minutes, a.ToaUs = other.Minutes, other.ToaUs
				return
			}
		}
	}
	t.lack("neither minutes nor toa_us", "one of them, here or in another aim of the source", "minutes", "toa_us")
}

// finishAim checks what concerns several keys and refuses those of other kinds.
func (t *table) finishAim(a *Aim, source *table, s *Source) {
	if t.has("minutes") && t.has("toa_us") {
		t.complain("toa_us", "minutes as well", "either minutes or toa_us", "")
	}
	if t.has("toa_us") && t.good("toa_us") {
		t.reachable(a, source, s)
	}
	switch {
	case !t.has("max_minutes"):
		a.MaxMinutes = 2 * a.Minutes
	case a.Minutes > 0 && a.MaxMinutes < a.Minutes && t.good("minutes", "max_minutes"):
		t.complain("max_minutes", plainNumber(a.MaxMinutes), "at least the wanted minutes, "+plainNumber(a.Minutes), "")
	}
	t.done(t.otherKindsKey(a.Kind))
	if len(t.bad) > 0 {
		source.bad["aim"] = true
	}
}

// reachable checks that the minutes can follow from a wanted TOA error.
func (t *table) reachable(a *Aim, source *table, s *Source) {
	if a.Kind == Calibration {
		t.complain("toa_us", plainNumber(a.ToaUs), "minutes: a calibrator has no pulses to time", "")
		return
	}
	var missing []string
	if s.Spin == nil && source.without("spin") {
		missing = append(missing, "spin")
	}
	if s.Flux == nil && source.without("flux") {
		missing = append(missing, "flux")
	}
	if s.WidthMs == 0 && source.without("width_ms") {
		missing = append(missing, "width_ms")
	}
	if len(missing) > 0 {
		t.complain("toa_us", "no "+strings.Join(missing, ", no ")+" in the source", "toa_us only with spin, flux and width_ms, from which the minutes follow; else minutes", "")
		return
	}
	if s.FloorUs > 0 && a.ToaUs <= s.FloorUs {
		t.complain("toa_us", plainNumber(a.ToaUs), "an error above floor_us, "+plainNumber(s.FloorUs)+": no time is long enough to go below it", "")
	}
}

// otherKindsKey explains keys that another kind of aim would have. They are not judged when the kind is not known.
func (t *table) otherKindsKey(kind AimKind) func(string) (string, string, bool) {
	own := slices.Clone(t.known)
	if kind == "" {
		t.known = append(t.known, aimKeyNames()...)
	}
	return func(key string) (string, string, bool) {
		kinds, ok := aimKeys[key]
		var names []string
		for _, k := range kinds {
			names = append(names, string(k))
		}
		return fmt.Sprintf("a key of %s aims", strings.Join(names, " and ")), fmt.Sprintf("the keys of a %s aim: %s", kind, strings.Join(own, ", ")), ok
	}
}

func aimKeyNames() []string {
	var names []string
	for key := range aimKeys {
		names = append(names, key)
	}
	slices.Sort(names)
	return names
}

// calibratorOnly refuses other aims beside calibration: a calibrator is a source whose only aim that is.
func (l *loader) calibratorOnly(list []*table, aims []Aim) {
	isCalibration := func(a Aim) bool { return a.Kind == Calibration }
	if !slices.ContainsFunc(aims, isCalibration) {
		return
	}
	for i, a := range aims {
		if a.Kind != Calibration && a.Kind != "" {
			list[i].complain("kind", fmt.Sprintf("%q beside calibration", a.Kind), "calibration aims only in a calibrator, no calibration aim in other sources", "")
		}
	}
}
