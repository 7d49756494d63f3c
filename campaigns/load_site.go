package campaigns

import (
	"fmt"
	"slices"
	"strings"
	"time"
	_ "time/tzdata" // zones must not depend on what the machine has
)

// readSites reads the telescopes.
func (l *loader) readSites(top *table) {
	list := top.tables("site")
	if len(list) == 0 && top.good("site") {
		top.lack("no sites", "at least one [[site]]", "site")
		l.unsure["site"] = true
	}
	for _, t := range list {
		s := t.site()
		l.once(t, "site", s.Name)
		t.done(t.otherMountsKey(s.Mount))
		l.campaign.Sites = append(l.campaign.Sites, s)
	}
}

// Which keys only some mounts have.
var mountKeys = map[string][]Mount{
	"azimuth_travel_deg":    {AltAz},
	"hour_angle_limits_deg": {Equatorial, Transit},
}

func (t *table) site() Site {
	s := Site{
		Name:                 t.nameOf("name"),
		LatitudeDeg:          t.number("latitude_deg", between(-90, 90)),
		LongitudeDeg:         t.number("longitude_deg", between(-180, 360)),
		HeightM:              t.number("height_m", between(-500, 9000)),
		DUT1Sec:              t.numberOr("dut1_s", between(-0.9, 0.9), 0),
		TimeZone:             t.zone("time_zone"),
		Mount:                Mount(t.word("mount", []string{string(AltAz), string(Equatorial), string(Transit)})),
		ElevationLimitsDeg:   t.limits("elevation_limits_deg", between(0, 90)),
		SlewDegPerMin:        t.pair("slew_deg_per_min", above(0, 6000), true, [2]float64{1, 1}),
		AccelerationDegPerS2: t.pair("acceleration_deg_per_s2", above(0, 100), true, [2]float64{1, 1}),
		SettleSec:            t.number("settle_s", between(0, 600)),
		SunLimitDeg:          t.number("sun_limit_deg", between(0, 90)),
		HorizonDeg:           t.horizon("horizon_deg"),
		Refraction:           t.refraction(),
	}
	switch s.Mount {
	case AltAz:
		s.AzimuthTravelDeg = t.limits("azimuth_travel_deg", between(-720, 720))
	case Equatorial, Transit:
		s.HourAngleLimitsDeg = t.limits("hour_angle_limits_deg", between(-180, 180))
	}
	return s
}

// refraction reads the air at a site; nil when limits are to hold without any.
func (t *table) refraction() *Refraction {
	r := t.table("refraction", "refraction", false)
	if r == nil {
		return nil
	}
	air := &Refraction{
		PressureHPa:  r.number("pressure_hpa", between(100, 1100)),
		TemperatureC: r.number("temperature_c", between(-80, 60)),
		Humidity:     r.number("humidity", between(0, 1)),
	}
	r.done(nil)
	t.passOn("refraction", r)
	return air
}

// otherMountsKey explains keys that another mount would have. They are not judged when the mount is not known.
func (t *table) otherMountsKey(mount Mount) func(string) (string, string, bool) {
	if mount == "" {
		for key := range mountKeys {
			t.known = append(t.known, key)
		}
	}
	return func(key string) (string, string, bool) {
		mounts, ok := mountKeys[key]
		var names []string
		for _, m := range mounts {
			names = append(names, fmt.Sprintf("%q", m))
		}
		return fmt.Sprintf("a key that does not belong to mount = %q", mount), "it only with mount = " + strings.Join(names, " or "), ok
	}
}

// zone reads the name of a time zone; UTC when it is not given: it changes what is shown, never a plan.
func (t *table) zone(key string) *time.Location {
	const accepted = "a time zone of the IANA database, such as \"Europe/Madrid\" or \"UTC\""
	v, ok := t.ask(key, false, accepted)
	if !ok {
		return time.UTC
	}
	name, ok := v.(string)
	if ok && name != "" && name != "Local" {
		if zone, err := time.LoadLocation(name); err == nil {
			return zone
		}
	}
	t.complain(key, describe(v), accepted, "")
	return time.UTC
}

// horizon reads the mask of azimuths and elevations, whose azimuths must rise.
func (t *table) horizon(key string) [][2]float64 {
	mask := t.pairs(key, below(0, 360), between(-10, 90), "azimuth and elevation in degrees")
	if !t.good(key) || !t.rising(key, "azimuth", mask) {
		return nil
	}
	return mask
}

// rising says that the first numbers of pairs rise.
func (t *table) rising(key, what string, pairs [][2]float64) bool {
	for i := 1; i < len(pairs); i++ {
		switch before, here := pairs[i-1][0], pairs[i][0]; {
		case here == before:
			t.complainAt(t.elementLine(key, i), key, fmt.Sprintf("%s %s twice", what, plainNumber(here)), "each "+what+" once", "")
			return false
		case here < before:
			t.complainAt(t.elementLine(key, i), key, fmt.Sprintf("%s %s after %s", what, plainNumber(here), plainNumber(before)), what+"s in rising order", "")
			return false
		}
	}
	return true
}

// gainCurve reads how the gain changes with elevation; nil where it is the same everywhere.
func (t *table) gainCurve(key string) [][2]float64 {
	curve := t.pairs(key, between(0, 90), above(0, 1.5), "elevation in degrees and factor of gain_k_per_jy")
	switch {
	case !t.has(key) || !t.good(key) || !t.rising(key, "elevation", curve):
		return nil
	case len(curve) < 2:
		t.complain(key, fmt.Sprintf("%d of them", len(curve)), "at least two pairs: elevation in degrees and factor of gain_k_per_jy", "")
		return nil
	}
	return curve
}

// readReceivers reads the front ends.
func (l *loader) readReceivers(top *table) {
	list := top.tables("receiver")
	if len(list) == 0 && top.good("receiver") {
		top.lack("no receivers", "at least one [[receiver]]", "receiver")
		l.unsure["receiver"] = true
	}
	for _, t := range list {
		r := Receiver{
			Name:          t.nameOf("name"),
			Site:          l.siteName(t),
			BandMHz:       t.limits("band_mhz", between(1, 1e6)),
			TsysK:         t.number("tsys_k", above(0, 10000)),
			ZenithOpacity: t.number("zenith_opacity", between(0, 5)),
			GainKPerJy:    t.number("gain_k_per_jy", above(0, 1000)),
			GainCurve:     t.gainCurve("gain_curve"),
			ChannelMHz:    t.numberOr("channel_mhz", between(0, 1e4), 0),
			Polarizations: t.count("polarizations", 1, 2, true, 1),
			ChangeMin:     t.number("change_min", between(0, 1440)),
		}
		l.once(t, "receiver", r.Name)
		if width := r.BandMHz[1] - r.BandMHz[0]; t.good("band_mhz", "channel_mhz") && r.ChannelMHz > width {
			t.complain("channel_mhz", plainNumber(r.ChannelMHz), "at most the width of the band, "+plainNumber(width), "")
		}
		t.done(nil)
		l.campaign.Receivers = append(l.campaign.Receivers, r)
	}
}

// siteName reads the name of a site that exists; it is empty when there is none.
func (l *loader) siteName(t *table) string {
	var names []string
	for _, s := range l.campaign.Sites {
		if s.Name != "" {
			names = append(names, s.Name)
		}
	}
	name := t.text("site", true)
	if t.has("site") && t.good("site") && !slices.Contains(names, name) {
		if l.dangling(t, t.line("site"), "site", "site", name, names) {
			return ""
		}
	}
	return name
}

// dangling complains about a name that refers to nothing, unless it may refer to an entry that could not be read.
func (l *loader) dangling(t *table, line int, key, kind, name string, names []string) bool {
	if l.unsure[kind] {
		return false
	}
	t.complainAt(line, key, fmt.Sprintf("%q, which does not exist", name), "one of the "+kind+"s: "+someOf(names), didYouMean(name, names))
	return true
}

// receiverNames reads names of receivers that exist. Nil means that the key is missing or at fault.
func (l *loader) receiverNames(t *table, needed bool) []string {
	var names []string
	for _, r := range l.campaign.Receivers {
		if r.Name != "" {
			names = append(names, r.Name)
		}
	}
	list := t.texts("receivers", needed)
	if t.has("receivers") && t.good("receivers") && len(list) == 0 {
		t.complain("receivers", "no receiver", "at least one of "+someOf(names), "")
	}
	var out []string
	for i, name := range list {
		if !slices.Contains(names, name) && l.dangling(t, t.elementLine("receivers", i), "receivers", "receiver", name, names) {
			continue
		}
		out = append(out, name)
	}
	return out
}
