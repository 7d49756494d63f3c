package main

import (
	"fmt"
	"strconv"
	"strings"
)

// commentColumn is where the remark behind a value begins.
const commentColumn = 36

// A page collects the lines of one TOML file.
type page struct{ strings.Builder }

func (p *page) line(text string) { p.WriteString(text + "\n") }

// set writes key = value, with a remark in its column if there is one.
func (p *page) set(key, value, remark string) {
	text := key + " = " + value
	if remark != "" {
		text = fmt.Sprintf("%-*s# %s", commentColumn-1, text+" ", remark)
	}
	p.line(text)
}

// remark writes text as comment lines.
func (p *page) remark(text string) {
	for _, l := range strings.Split(text, "\n") {
		p.line(strings.TrimRight("# "+l, " "))
	}
}

func quoted(s string) string { return strconv.Quote(s) }

func quotedList(words []string) string {
	var out []string
	for _, w := range words {
		out = append(out, quoted(w))
	}
	return "[" + strings.Join(out, ", ") + "]"
}

// plain writes a number as one would by hand: no exponent, no trailing zeros, but a decimal point.
func plain(x float64) string {
	s := strconv.FormatFloat(x, 'f', -1, 64)
	if !strings.Contains(s, ".") {
		s += ".0"
	}
	return s
}

// whole writes a number without a point if it has no fraction.
func whole(x float64) string { return strconv.FormatFloat(x, 'f', -1, 64) }

// small writes a number with an exponent, as sigmas are written.
func small(x float64) string {
	if x == 0 {
		return "0.0"
	}
	s := strconv.FormatFloat(x, 'e', -1, 64)
	mantissa, exponent, _ := strings.Cut(s, "e")
	n, _ := strconv.Atoi(exponent)
	if n >= -3 && n < 3 {
		return plain(x)
	}
	return fmt.Sprintf("%se%d", mantissa, n)
}

func pair(a, b string) string { return "[" + a + ", " + b + "]" }

func chapterText(c chapter, sources []source) string {
	p := &page{}
	p.remark(c.head)
	p.remark("\nInvented, like everything in this campaign: no entry describes a real source.")
	for _, s := range sources {
		if s.chapter == c.name {
			p.line("")
			p.source(s)
		}
	}
	return p.String()
}

func (p *page) source(s source) {
	p.remark(s.role)
	p.line("[[source]]")
	p.set("name", quoted(s.name), "")
	p.set("ra", quoted(s.raText), "")
	p.set("dec", quoted(s.decText), "")
	if s.pm != [2]float64{} {
		p.set("pm_mas_per_yr", pair(plain(s.pm[0]), plain(s.pm[1])), "")
		p.set("position_epoch_mjd", plain(s.spinEpoch), "")
	}
	if s.positions != [2]float64{} {
		p.set("sigma_position_mas", pair(whole(s.positions[0]), whole(s.positions[1])), s.positionRemark())
	}
	if s.parallax > 0 {
		p.set("parallax_mas", plain(s.parallax), "")
	}
	if s.raised > 0 {
		p.set("priority", plain(s.raised), "was "+plain(s.priority)+" until November")
	} else {
		p.set("priority", plain(s.priority), "")
	}
	if s.periodS > 0 {
		p.set("spin", s.spinText(), "")
		p.set("dm_pc_per_cm3", plain(s.dm), "")
	}
	p.set("flux", fmt.Sprintf("{ mjy = %s, at_mhz = %s, spectral_index = %s }", whole(s.mjy), whole(s.atMHz), plain(s.index)), "")
	if s.periodS > 0 {
		p.set("width_ms", whole(s.widthMs), fmt.Sprintf("%.1f %% of a period of %s ms", 100*s.widthMs/(1000*s.periodS), whole(roundFigures(1000*s.periodS, 5))))
		p.set("jitter_us_per_hour", whole(s.jitterUs), "")
	}
	if s.floorUs > 0 {
		p.set("floor_us", plain(s.floorUs), "no amount of time goes below this")
	}
	if s.skyK > 0 {
		p.set("sky_k", whole(s.skyK), "at 408 MHz, measured")
	}
	if s.sunLimit > 0 {
		p.set("sun_limit_deg", whole(s.sunLimit), "stricter than the site's")
	}
	if s.glitchMJD > 0 {
		p.set("glitch_mjd", plain(s.glitchMJD), timeOf(s.glitchMJD).Format("2 January 2006"))
	}
	if s.orbit != nil {
		p.orbit(s.orbit)
	}
	for _, a := range s.aims {
		p.line("")
		p.aim(a)
	}
}

func (s source) positionRemark() string {
	if s.chapter == "new" {
		return "a year of visits will mend this"
	}
	return ""
}

func (s source) spinText() string {
	text := fmt.Sprintf("{ frequency_hz = %s, derivative_hz_per_s = %s, epoch_mjd = %s, sigma_frequency_hz = %s, sigma_derivative_hz_per_s = %s",
		plain(s.frequencyHz), small(s.slowdownHz), plain(s.spinEpoch), small(s.sigma.frequencyHz), small(s.sigma.derivativeHzPerS))
	return text + fmt.Sprintf(", sigma_phase_turns = %s }", whole(s.sigma.phaseTurns))
}

func (p *page) orbit(o *orbit) {
	p.line("[source.orbit]")
	p.set("period_days", plain(o.periodDays), orbitRemark(o.periodDays))
	if o.periastronMJD > 0 {
		p.set("periastron_mjd", plain(o.periastronMJD), "")
	} else {
		p.set("ascending_node_mjd", plain(o.nodeMJD), "")
	}
	p.set("semimajor_ls", plain(o.semimajorLs), "")
	if o.eccentricity > 0 {
		p.set("eccentricity", plain(o.eccentricity), "")
		p.set("periastron_deg", plain(o.periastronDeg), "")
	}
	if o.advanceDegPerYr > 0 {
		p.set("advance_deg_per_yr", plain(o.advanceDegPerYr), "")
	}
	if o.decay != 0 {
		p.set("decay", small(o.decay), "dPb/dt, s/s")
	}
	if o.companionMsun > 0 {
		p.set("companion_msun", plain(o.companionMsun), "")
	}
	if o.sinI > 0 {
		p.set("sin_i", plain(o.sinI), "")
	}
	p.set("sigma_period_days", small(o.sigmaPeriodDays), "")
	p.set("sigma_epoch_days", small(o.sigmaEpochDays), "")
	if e := o.eclipse; e != nil {
		p.set("eclipse", fmt.Sprintf("{ half_width_turns = %s, centre_turns = %s, margin_turns = %s }",
			plain(e.halfWidthTurns), plain(e.centreTurns), plain(e.marginTurns)), "")
	}
}

func orbitRemark(days float64) string {
	switch {
	case days < 2:
		return fmt.Sprintf("%.2f hours", 24*days)
	default:
		return ""
	}
}

func (p *page) aim(a aim) {
	p.line("[[source.aim]]")
	p.set("kind", quoted(a.kind), a.comment)
	number := func(key string, x float64) {
		if x != 0 {
			p.set(key, whole(x), "")
		}
	}
	number("every_days", a.everyDays)
	if a.ramp != nil {
		p.set("ramp", fmt.Sprintf("{ from = %s, first_days = %s, factor = %s }", a.ramp.from, whole(a.ramp.firstDays), plain(a.ramp.factor)), "")
	}
	number("half_width_turns", a.halfWidth)
	number("wanted", float64(a.wanted))
	number("bins", float64(a.bins))
	number("per_bin", float64(a.perBin))
	if a.since != "" {
		p.set("since", a.since, "")
	}
	if a.parameter != "" {
		p.set("parameter", quoted(a.parameter), "")
	}
	number("goal_percent", a.goalPercent)
	number("max_phase_error_turns", a.maxPhase)
	if len(a.receivers) > 0 {
		p.set("receivers", quotedList(a.receivers), "")
	}
	number("per_session", float64(a.perSession))
	number("pair_days", a.pairDays)
	if a.toaUs > 0 {
		p.set("toa_us", whole(a.toaUs), fmt.Sprintf("about %s minutes high in the sky", whole(a.minutes)))
	} else {
		number("minutes", a.minutes)
	}
	number("min_fraction", a.minFrac)
	number("max_minutes", a.maxMinutes)
	number("carry", a.carry)
	number("min_gap_days", a.minGap)
}
