package campaigns

import (
	"fmt"
	"strings"

	"example.org/tallystick/sky/orbit"
)

// j2000 is the Modified Julian Date of the epoch J2000.0, at which positions hold unless told otherwise.
const j2000 = 51544.5

// mjd are the dates that are taken for possible: 1900 to 2200.
var mjd = between(15020, 124594)

// readSources reads the pulsars and calibrators of one file.
func (l *loader) readSources(top *table) {
	for _, t := range top.tables("source") {
		s := l.source(t)
		l.once(t, "source", s.Name)
		l.campaign.Sources = append(l.campaign.Sources, s)
	}
}

func (l *loader) source(t *table) Source {
	s := Source{
		Name:             t.nameOf("name"),
		RADeg:            t.ra("ra"),
		DecDeg:           t.dec("dec"),
		PMMasPerYr:       t.pair("pm_mas_per_yr", between(-20000, 20000), false, [2]float64{}),
		PositionMJD:      t.numberOr("position_epoch_mjd", mjd, j2000),
		Priority:         t.numberOr("priority", above(0, 1000), 1),
		SigmaPositionMas: t.pair("sigma_position_mas", between(0, 1e8), false, [2]float64{}),
		ParallaxMas:      t.numberOr("parallax_mas", between(0, 1000), 0),
		Spin:             t.spin(),
		DMPcPerCm3:       t.numberOr("dm_pc_per_cm3", between(0, 10000), 0),
		Flux:             t.flux(),
		Scintillation:    t.scintillation(),
		WidthMs:          t.numberOr("width_ms", above(0, 100000), 0),
		Template:         t.template(),
		JitterUsPerHour:  t.numberOr("jitter_us_per_hour", between(0, 1e6), 0),
		JitterFraction:   t.numberOr("jitter_fraction", between(0, 1), 0),
		FloorUs:          t.numberOr("floor_us", between(0, 1e6), 0),
		SkyK:             t.numberOr("sky_k", above(0, 1e6), 0),
		SunLimitDeg:      t.numberOr("sun_limit_deg", between(0, 90), 0),
		GlitchMJD:        t.numberOr("glitch_mjd", mjd, 0),
		Orbit:            t.orbit(),
		File:             t.doc.name,
		Line:             t.doc.lines[t.place],
	}
	l.stricterThanSites(t, s)
	if s.Spin != nil && s.WidthMs > 0 && t.good("spin", "width_ms") && s.WidthMs*s.Spin.FrequencyHz >= 1000 {
		t.complain("width_ms", plainNumber(s.WidthMs), fmt.Sprintf("a width below the period, %.6g ms", 1000/s.Spin.FrequencyHz), "")
	}
	if s.Template != "" && s.WidthMs == 0 && t.without("width_ms") {
		t.complain("template", "no width_ms in the source", "template only with width_ms, the full width of the pulse at half its height", "")
	}
	if s.JitterUsPerHour > 0 && s.JitterFraction > 0 && t.good("jitter_us_per_hour", "jitter_fraction") {
		t.complain("jitter_fraction", plainNumber(s.JitterFraction), "jitter_us_per_hour or jitter_fraction, not both", "")
	}
	s.Aims = l.aims(t, &s)
	t.done(nil)
	return s
}

// template reads which template a source is timed with; it is empty where none is named.
func (t *table) template() string {
	const key, accepted = "template", GaussianTemplate + ", or no such key: TOA errors are then W/(S/N)"
	v, ok := t.ask(key, false, accepted)
	if !ok {
		return ""
	}
	if word, _ := v.(string); word != GaussianTemplate {
		t.complain(key, describe(v), accepted, didYouMean(word, []string{GaussianTemplate}))
		return ""
	}
	return GaussianTemplate
}

// stricterThanSites refuses a Sun limit that is laxer than that of every site, since it would never count.
func (l *loader) stricterThanSites(t *table, s Source) {
	if s.SunLimitDeg == 0 || len(l.campaign.Sites) == 0 || !t.good("sun_limit_deg") {
		return
	}
	least := l.campaign.Sites[0].SunLimitDeg
	for _, site := range l.campaign.Sites {
		least = min(least, site.SunLimitDeg)
	}
	if s.SunLimitDeg < least {
		t.complain("sun_limit_deg", plainNumber(s.SunLimitDeg), "a limit stricter than the site's, "+plainNumber(least), "")
	}
}

func (t *table) spin() *Spin {
	s := t.table("spin", "spin", false)
	if s == nil {
		return nil
	}
	spin := &Spin{
		FrequencyHz:           s.number("frequency_hz", above(0, 2000)),
		DerivativeHzPerS:      s.numberOr("derivative_hz_per_s", between(-1e-6, 1e-6), 0),
		EpochMJD:              s.number("epoch_mjd", mjd),
		SigmaFrequencyHz:      s.numberOr("sigma_frequency_hz", between(0, 100), 0),
		SigmaDerivativeHzPerS: s.numberOr("sigma_derivative_hz_per_s", between(0, 1e-6), 0),
		SigmaPhaseTurns:       s.numberOr("sigma_phase_turns", between(0, 1), 0),
	}
	s.done(nil)
	t.passOn("spin", s)
	return spin
}

func (t *table) flux() *Flux {
	f := t.table("flux", "flux", false)
	if f == nil {
		return nil
	}
	flux := &Flux{
		MJy:           f.number("mjy", above(0, 1e7)),
		AtMHz:         f.number("at_mhz", between(1, 1e6)),
		SpectralIndex: f.number("spectral_index", between(-10, 10)),
	}
	f.done(nil)
	t.passOn("flux", f)
	return flux
}

func (t *table) scintillation() *Scintillation {
	s := t.table("scintillation", "scintillation", false)
	if s == nil {
		return nil
	}
	out := &Scintillation{
		Minutes: s.number("minutes", above(0, 1e5)),
		MHz:     s.number("mhz", above(0, 1e6)),
		AtMHz:   s.number("at_mhz", between(1, 1e6)),
	}
	s.done(nil)
	t.passOn("scintillation", s)
	return out
}

func (t *table) orbit() *Orbit {
	o := t.table("orbit", "orbit", false)
	if o == nil {
		return nil
	}
	out := &Orbit{
		PeriodDays:       o.numberOr("period_days", periodDays, 0),
		FrequencySeries:  o.frequencySeries(),
		AscendingNodeMJD: o.numberOr("ascending_node_mjd", mjd, 0),
		PeriastronMJD:    o.numberOr("periastron_mjd", mjd, 0),
		SemimajorLs:      o.number("semimajor_ls", above(0, 1e5)),
		Eccentricity:     o.numberOr("eccentricity", below(0, 1), 0),
		PeriastronDeg:    o.numberOr("periastron_deg", between(-360, 360), 0),
		AdvanceDegPerYr:  o.numberOr("advance_deg_per_yr", between(-1000, 1000), 0),
		Decay:            o.numberOr("decay", between(-1e-7, 1e-7), 0),
		CompanionMsun:    o.numberOr("companion_msun", above(0, 100), 0),
		SinI:             o.numberOr("sin_i", above(0, 1), 0),
		EinsteinDelaySec: o.numberOr("einstein_delay_s", above(0, 100), 0),
		SigmaPeriodDays:  o.numberOr("sigma_period_days", between(0, 100), 0),
		SigmaEpochDays:   o.numberOr("sigma_epoch_days", between(0, 1000), 0),
		SigmaSemimajorLs: o.numberOr("sigma_semimajor_ls", between(0, 1e5), 0),
		SigmaDecay:       o.numberOr("sigma_decay", between(0, 1e-7), 0),
		SigmaAdvance:     o.numberOr("sigma_advance_deg_per_yr", between(0, 1000), 0),
		SigmaEinsteinSec: o.numberOr("sigma_einstein_delay_s", between(0, 100), 0),
		DataMJD:          o.dataMJD(),
		Eclipse:          o.eclipse(),
	}
	o.periodOfOrbit(out)
	o.epochOfOrbit(out)
	o.einsteinDelay(out)
	o.done(nil)
	t.passOn("orbit", o)
	if len(o.bad) == 0 {
		t.possible(out)
	}
	return out
}

// periodDays are the periods of orbits: no pulsar's is shorter than a minute and a half.
var periodDays = between(0.001, 1e5)

// mostTerms is how many terms a frequency series may have; published ones have up to 13.
const mostTerms = 20

// frequencySeries reads an orbital frequency and its derivatives.
func (t *table) frequencySeries() []float64 {
	const key = "frequency_series"
	accepted := fmt.Sprintf("an array of 1 to %d numbers: orbital frequency in Hz, of a period %s days, and its derivatives in Hz/s, Hz/s2, ...", mostTerms, periodDays)
	v, ok := t.ask(key, false, accepted)
	if !ok {
		return nil
	}
	list, ok := v.([]any)
	if !ok || len(list) == 0 || len(list) > mostTerms {
		t.complain(key, describe(v), accepted, "")
		return nil
	}
	out := make([]float64, len(list))
	for i, e := range list {
		x, ok := asNumber(e)
		if !ok || !between(-1, 1).holds(x) || i == 0 && !periodDays.holds(1/x/secPerDay) {
			t.complainAt(t.elementLine(key, i), key, fmt.Sprintf("as term %d %s", i, describe(e)), accepted, "")
			return nil
		}
		out[i] = x
	}
	return out
}

// periodOfOrbit checks that the orbit has one kind of period, and fills it in.
func (t *table) periodOfOrbit(o *Orbit) {
	const accepted = "either period_days or frequency_series"
	period, series := t.has("period_days"), t.has("frequency_series")
	switch {
	case period && series:
		t.complain("frequency_series", "period_days as well", accepted, "")
	case series && t.has("decay"):
		t.complain("decay", "frequency_series as well", "one of them: the second term of frequency_series says the decay", "")
	case !period && !series:
		t.lack("no period", accepted, "period_days", "frequency_series")
	case o.FrequencySeries != nil:
		o.PeriodDays = 1 / o.FrequencySeries[0] / secPerDay
	}
}

// einsteinDelay refuses the Einstein delay of a circular orbit, which has none, and one larger than any companion makes.
func (t *table) einsteinDelay(o *Orbit) {
	if !t.good("period_days", "frequency_series", "eccentricity") {
		return
	}
	if o.Eccentricity == 0 {
		for _, key := range []string{"einstein_delay_s", "sigma_einstein_delay_s"} {
			if t.has(key) && t.good(key) {
				t.complain(key, "it in a circular orbit", "it only with an eccentricity above 0", "")
			}
		}
		return
	}
	if most := orbit.LargestEinsteinSec(o.PeriodDays, o.Eccentricity); t.good("einstein_delay_s") && o.EinsteinDelaySec > most {
		t.complain("einstein_delay_s", plainNumber(o.EinsteinDelaySec), fmt.Sprintf("at most %.3g s, as a companion of 100 Msun makes in this orbit", most), "")
	}
}

// dataMJD reads the span of the observations behind an ephemeris.
func (t *table) dataMJD() [2]float64 {
	span := t.pair("data_mjd", mjd, false, [2]float64{})
	if t.has("data_mjd") && t.good("data_mjd") && span[0] >= span[1] {
		t.complain("data_mjd", describe(t.keys["data_mjd"]), "the first and the last date of the observations, the earlier one first", "")
	}
	return span
}

// possible refuses an orbit whose elements are possible one by one but not together.
func (t *table) possible(o *Orbit) {
	_, err := orbit.New(o.elements())
	if err == nil {
		return
	}
	for _, fault := range strings.Split(err.Error(), "\n") {
		what, found, ok := strings.Cut(fault, ": found ")
		if !ok {
			continue // a remark on the line before
		}
		if what != "orbit" {
			found = what + " " + found
		}
		found, accepted, _ := strings.Cut(found, "; accepted ")
		t.complain("orbit", found, accepted, "")
	}
}

// epochOfOrbit checks that the orbit has one epoch, and its orientation where that tells node and periastron apart.
func (t *table) epochOfOrbit(o *Orbit) {
	const accepted = "either ascending_node_mjd or periastron_mjd"
	node, periastron := t.has("ascending_node_mjd"), t.has("periastron_mjd")
	switch {
	case node && periastron:
		t.complain("periastron_mjd", "both epochs", accepted, "")
	case !node && !periastron:
		t.lack("no epoch", accepted, "ascending_node_mjd", "periastron_mjd")
	case (periastron || o.Eccentricity > 0) && !t.has("periastron_deg"):
		t.lack("nothing", "a number from -360 to 360: an eccentric orbit and one counted from periastron need it", "periastron_deg")
	}
}

func (t *table) eclipse() *Eclipse {
	e := t.table("eclipse", "eclipse", false)
	if e == nil {
		return nil
	}
	eclipse := &Eclipse{
		HalfWidthTurns: e.number("half_width_turns", strictly(0, 0.5)),
		CentreTurns:    e.numberOr("centre_turns", below(0, 1), 0.25),
		MarginTurns:    e.numberOr("margin_turns", below(0, 0.5), 0),
		ReferenceMHz:   e.numberOr("reference_mhz", between(1, 1e6), 0),
		Index:          e.numberOr("index", between(-10, 10), 0),
	}
	if e.has("index") != e.has("reference_mhz") && e.good("index", "reference_mhz") {
		e.lack("only one of them", "both index and reference_mhz, or neither: the width goes as (frequency/reference_mhz)^index", "index", "reference_mhz")
	}
	if e.good("half_width_turns", "margin_turns") && eclipse.HalfWidthTurns+eclipse.MarginTurns >= 0.5 {
		e.complain("margin_turns", plainNumber(eclipse.MarginTurns), fmt.Sprintf("less than %s: half width and margin stay below half a turn", plainNumber(0.5-eclipse.HalfWidthTurns)), "")
	}
	e.done(nil)
	t.passOn("eclipse", e)
	return eclipse
}

// passOn makes a key bad when something in its table is, so that nothing is concluded from it.
func (t *table) passOn(key string, inner *table) {
	if len(inner.bad) > 0 {
		t.bad[key] = true
	}
}
