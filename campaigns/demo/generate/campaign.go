package main

import (
	"fmt"
	"strings"
	"time"
)

const campaignHead = `The demonstration campaign of tallystick. EVERYTHING IN IT IS INVENTED: the observatory, its dish and
receivers, every source with its ephemeris, every session and every line of the logbook.

The scenario: Corvane is a 60-m dish on a limestone plateau, with a hill in the east. Since May 2025 it has
been given a session of eight to ten hours every four or five days to time %d sources:

  sources/slow.toml          bright old pulsars that need little
  sources/young.toml         restless ones, one of which has just glitched
  sources/millisecond.toml   the clocks, each wanted in both receivers
  sources/new.toml           two that were found this autumn and are easily lost again
  sources/binaries.toml      orbits from an hour and a half to 150 days
  sources/calibrators.toml   what every session must have

The time has never been enough. Between 17 and 20 hours of sidereal time too many want the same minutes; in
February 2026 the azimuth drive failed for two weeks, in the summer the L receiver was warm for three, and the
weather took its share. It is now 3 December 2026, 15:00 UTC; in three hours the first of ten sessions
begins. Among its claims: an edge-on binary that passes behind its companion at 00:52, a new pulsar whose
pulse count will be ambiguous by the next session, a glitched one that wants to be seen every few days, and a
long queue of others that are overdue.

Change what you like: "tallystick check" says whether it still makes sense.`

func campaignText(sources []source) string {
	p := &page{}
	p.remark(fmt.Sprintf(campaignHead, len(sources)))
	p.line("format = 1")
	p.line("")
	p.line("[campaign]")
	p.set("name", quoted("Corvane timing watch (invented)"), "")
	p.set("include", `["sources/*.toml"]`, "")
	p.line("")
	p.site()
	for _, r := range receivers {
		p.line("")
		p.receiver(r)
	}
	p.line("")
	p.remark("The ten sessions that have been granted. Times are UTC.")
	for _, s := range coming() {
		p.line("")
		p.session(s)
	}
	return p.String()
}

func (p *page) site() {
	p.line("[[site]]")
	p.set("name", quoted(siteName), "")
	p.set("latitude_deg", fmt.Sprintf("%.4f", siteLatitudeDeg), "")
	p.set("longitude_deg", fmt.Sprintf("%.4f", siteLongitudeDeg), "east positive")
	p.set("height_m", whole(siteHeightM), "")
	p.set("time_zone", quoted("Europe/Paris"), "")
	p.set("elevation_limits_deg", pair(whole(siteElevationDeg[0]), whole(siteElevationDeg[1])), "")
	p.set("azimuth_travel_deg", "[-270, 270]", "cable wrap, 0 = north, through east")
	p.set("slew_deg_per_min", pair(whole(slewAzDegPerMin), whole(slewElDegPerMin)), "azimuth, elevation")
	p.set("acceleration_deg_per_s2", "[0.08, 0.05]", "")
	p.set("settle_s", whole(settleMin*60), "after every move")
	p.set("sun_limit_deg", whole(siteSunLimitDeg), "never point closer to the Sun than this")
	p.line("horizon_deg = [                    # azimuth, elevation; Corvane Hill stands in the east")
	for _, h := range siteHorizonDeg {
		p.line("  " + pair(whole(h[0]), plain(h[1])) + ",")
	}
	p.line("]")
	p.set("mount", quoted("altaz"), "")
}

func (p *page) receiver(r receiver) {
	p.remark(r.name + ": " + r.comment + ".")
	p.line("[[receiver]]")
	p.set("name", quoted(r.name), "")
	p.set("site", quoted(siteName), "")
	p.set("band_mhz", pair(whole(r.bandMHz[0]), whole(r.bandMHz[1])), "")
	p.set("tsys_k", whole(r.tsysK), "at zenith, without the sky")
	p.set("zenith_opacity", whole(r.opacity), "nepers")
	p.set("gain_k_per_jy", whole(r.gain), "")
	p.set("polarizations", "2", "")
	p.set("change_min", whole(changeMin), "time to bring it into the beam")
}

func (p *page) session(s session) {
	p.remark(s.remark)
	p.line("[[session]]")
	p.set("name", quoted(s.name()), fmt.Sprintf("%s hours", whole(roundTo(float64(s.minutes)/60, 1))))
	p.set("site", quoted(siteName), "")
	p.set("start", s.start.Format(time.RFC3339), "")
	p.set("end", s.end().Format(time.RFC3339), "")
	p.set("receivers", quotedList(s.rx), "")
	p.set("slot_overhead_min", plain(overheadMin), "noise diode and set-up at the head of every slot")
	if len(s.breaks) > 0 {
		var spans []string
		for _, b := range s.breaks {
			spans = append(spans, pair(b[0].Format(time.RFC3339), b[1].Format(time.RFC3339)))
		}
		p.set("breaks", "["+strings.Join(spans, ", ")+"]", "")
	}
}
