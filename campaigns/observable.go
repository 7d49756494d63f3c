package campaigns

import (
	"fmt"
	"math"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky"
	"example.org/tallystick/sky/orbit"
)

// limits are what keeps the site's telescope from a source.
func (s *Site) limits(src *Source) sky.Limits {
	l := sky.Limits{LowDeg: s.ElevationLimitsDeg[0], HighDeg: s.ElevationLimitsDeg[1], SunDeg: s.sunLimit(src)}
	for _, p := range s.HorizonDeg {
		l.Mask = append(l.Mask, sky.MaskPoint{AzimuthDeg: p[0], ElevationDeg: p[1]})
	}
	if s.Refraction != nil {
		l.Refraction = s.Refraction.air()
	}
	return s.mount().Limits(l)
}

// air is the refraction as sky works with it; the loader has checked its ranges.
func (r *Refraction) air() *sky.Refraction {
	air, err := sky.NewRefraction(r.PressureHPa, r.TemperatureC, r.Humidity)
	if err != nil {
		panic("campaigns: " + err.Error())
	}
	return air
}

// Air says, for an output, which elevations the limits hold for.
func (s *Site) Air() string {
	if s.Refraction == nil {
		return "elevations without refraction"
	}
	return fmt.Sprintf("limits with radio refraction at %g hPa, %g C, humidity %g; elevations without", s.Refraction.PressureHPa, s.Refraction.TemperatureC, s.Refraction.Humidity)
}

// sunLimit is the stricter of the site's and the source's own.
func (s *Site) sunLimit(src *Source) float64 { return math.Max(s.SunLimitDeg, src.SunLimitDeg) }

func (s *Site) mount() sky.Mount {
	m := sky.Mount{
		TravelDeg: s.AzimuthTravelDeg, HourAngleDeg: s.HourAngleLimitsDeg,
		RateDegPerMin: s.SlewDegPerMin, AccelDegPerS2: s.AccelerationDegPerS2, SettleSec: s.SettleSec,
	}
	switch s.Mount {
	case Equatorial:
		m.Kind = sky.Equatorial
	case Transit:
		m.Kind = sky.Transit
	default:
		m.Kind = sky.AltAz
	}
	return m
}

// inMinutes are the whole minutes of windows, counted from start, with what opens and closes each. A window
// shorter than a minute is gone.
func inMinutes(windows []sky.Window, start time.Time) []sched.Window {
	var out []sched.Window
	for _, w := range windows {
		from := int(math.Ceil(w.From.Sub(start).Minutes() - 1e-9))
		to := int(math.Floor(w.To.Sub(start).Minutes() + 1e-9))
		if to > from {
			out = append(out, sched.Window{Span: sched.Span{From: from, To: to}, OpensBy: cause(w.OpensBy, "session start"), ClosesBy: cause(w.ClosesBy, "session end")})
		}
	}
	return out
}

func cause(c sky.Cause, atEnd string) string {
	if c.Kind == sky.Interval {
		return atEnd
	}
	return c.String()
}

// without takes spans out of windows; what is left is closed and opened by the reason.
func without(windows []sched.Window, spans []sched.Span, reason string) []sched.Window {
	for _, s := range spans {
		var left []sched.Window
		for _, w := range windows {
			if s.To <= w.From || s.From >= w.To {
				left = append(left, w)
				continue
			}
			if s.From > w.From {
				left = append(left, sched.Window{Span: sched.Span{From: w.From, To: s.From}, OpensBy: w.OpensBy, ClosesBy: reason})
			}
			if s.To < w.To {
				left = append(left, sched.Window{Span: sched.Span{From: s.To, To: w.To}, OpensBy: reason, ClosesBy: w.ClosesBy})
			}
		}
		windows = left
	}
	return windows
}

// both are the stretches that two lists of windows share.
func both(a, b []sched.Window) []sched.Window {
	var out []sched.Window
	for i, j := 0, 0; i < len(a) && j < len(b); {
		w := a[i]
		if b[j].From > w.From {
			w.From, w.OpensBy = b[j].From, b[j].OpensBy
		}
		if b[j].To < w.To {
			w.To, w.ClosesBy = b[j].To, b[j].ClosesBy
		}
		if w.To > w.From {
			out = append(out, w)
		}
		if a[i].To < b[j].To {
			i++
		} else {
			j++
		}
	}
	return out
}

func spans(windows []sched.Window) []sched.Span {
	var out []sched.Span
	for _, w := range windows {
		out = append(out, w.Span)
	}
	return out
}

func longest(windows []sched.Window) int {
	most := 0
	for _, w := range windows {
		most = max(most, w.To-w.From)
	}
	return most
}

// hidden are the whole minutes, rounded outward, in which spans of orbit time are heard, within minutes 0 to last.
func (k *knowledge) hidden(in []orbit.Span, start time.Time, last int) []sched.Span {
	var out []sched.Span
	for _, s := range in {
		from := k.clock.heardAt(s.FromMJD).Sub(start).Minutes()
		to := k.clock.heardAt(s.ToMJD).Sub(start).Minutes()
		span := sched.Span{From: max(0, int(math.Floor(from))), To: min(last, int(math.Ceil(to)))}
		if span.To > span.From {
			out = append(out, span)
		}
	}
	return out
}

// An eclipsed stretch of a session is what one receiver loses.
type eclipsed struct {
	halfWidthTurns float64
	hidden         []sched.Span // minutes in which the source is behind its companion
	untimable      []bool       // by minute: hidden, or too close to the edge to be timed
}

// reason names the eclipse where a window is cut by it.
func (e *eclipsed) reason() string { return fmt.Sprintf("eclipse, ±%.3g turns", e.halfWidthTurns) }

// eclipses is what a receiver loses of the minutes 0 to last of a session.
func (k *knowledge) eclipses(r *Receiver, start time.Time, last int) eclipsed {
	out := eclipsed{untimable: make([]bool, last+1)}
	o := k.source.Orbit
	if o == nil || o.Eclipse == nil {
		return out
	}
	margin := k.clock.reach()
	from, to := tdbMJD(start.Add(-margin)), tdbMJD(start.Add(time.Duration(last)*time.Minute+margin))
	e := o.Eclipse.at(r)
	out.halfWidthTurns = e.HalfWidthTurns
	out.hidden = k.hidden(k.clock.orbit.EclipseSpans(e, from, to), start, last)
	for _, s := range k.hidden(k.clock.orbit.UntimableSpans(e, from, to), start, last) {
		for m := s.From; m < s.To; m++ {
			out.untimable[m] = true
		}
	}
	return out
}
