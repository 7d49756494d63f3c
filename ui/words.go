package ui

import (
	"fmt"
	"math"
	"strings"
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

// A zone is what is written beside UTC.
type zone int

const (
	zoneLST zone = iota
	zoneLocal
	zoneMJD
	zones
)

// name is how a zone is called at a site.
func (z zone) name(site *campaigns.Site, at time.Time) string {
	switch z {
	case zoneLocal:
		if site == nil || site.TimeZone == nil {
			return "local"
		}
		return at.In(site.TimeZone).Format("-07:00")
	case zoneMJD:
		return "MJD"
	}
	return "LST"
}

// write writes a minute of the session in a zone.
func (z zone) write(p *campaigns.Prepared, minute int) string {
	at := p.Instant(minute)
	switch z {
	case zoneLocal:
		if p.Site.TimeZone != nil {
			return at.In(p.Site.TimeZone).Format("15:04")
		}
		return at.UTC().Format("15:04")
	case zoneMJD:
		return fmt.Sprintf("%.3f", mjd(at))
	}
	return hours(p.LSTHours[min(max(minute, 0), len(p.LSTHours)-1)])
}

// mjd is the Modified Julian Date in UTC: days since 1858-11-17.
func mjd(t time.Time) float64 { return float64(t.Unix())/86400 + 40587 }

// hours writes hours of a clock as hh:mm.
func hours(h float64) string {
	m := int(math.Round(h*60)) % 1440
	if m < 0 {
		m += 1440
	}
	return fmt.Sprintf("%02d:%02d", m/60, m%60)
}

// signedHours writes an hour angle as -h:mm or +h:mm.
func signedHours(h float64) string {
	sign := "+"
	if h < 0 {
		sign, h = "-", -h
	}
	m := int(math.Round(h * 60))
	return fmt.Sprintf("%s%d:%02d", sign, m/60, m%60)
}

func clock(t time.Time) string { return t.UTC().Format("15:04") }

func date(t time.Time) string {
	if t.IsZero() {
		return "never"
	}
	return t.UTC().Format("2006-01-02")
}

// seconds writes a duration that an observer waits through: "50 s", "3 min 34 s".
func seconds(s int) string {
	switch {
	case s < 0:
		return "-" + seconds(-s)
	case s < 60:
		return fmt.Sprintf("%d s", s)
	case s%60 == 0:
		return fmt.Sprintf("%d min", s/60)
	}
	return fmt.Sprintf("%d min %d s", s/60, s%60)
}

// count writes a number of things: "1 slot", "3 slots".
func count(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

// worthChange says what an edit does to the worth of the plan.
func worthChange(before, after sched.Micro) string {
	switch d := after - before; {
	case d > 0:
		return fmt.Sprintf("worth %s, up %s", after, d)
	case d < 0:
		return fmt.Sprintf("worth %s, down %s", after, -d)
	}
	return fmt.Sprintf("worth %s, as before", after)
}

// ago writes how long something was before now.
func ago(now, then time.Time) string {
	switch d := now.Sub(then); {
	case d < time.Minute:
		return "just now"
	case d < time.Hour:
		return fmt.Sprintf("%d min ago", int(d.Minutes()))
	case d < 48*time.Hour:
		return fmt.Sprintf("%.0f h ago", d.Hours())
	default:
		return fmt.Sprintf("%.0f days ago", d.Hours()/24)
	}
}

// number writes a figure with about three digits, "-" where it is not known.
func number(v float64) string {
	switch a := math.Abs(v); {
	case v == 0:
		return "-"
	case a < 10:
		return fmt.Sprintf("%.2f", v)
	case a < 100:
		return fmt.Sprintf("%.1f", v)
	case a < 1e5:
		return fmt.Sprintf("%.0f", v)
	}
	return fmt.Sprintf("%.1e", v)
}

// oneCell replaces signs that some terminals draw two cells wide.
var oneCell = strings.NewReplacer("°", " deg", "–", "-", "—", "-", "…", "...", "×", "x", "µ", "u", "→", "->", "±", "+/-")
