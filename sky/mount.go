package sky

import (
	"fmt"
	"math"
	"time"
)

// MountKind says which axes a telescope turns about.
type MountKind int

// The mounts.
const (
	AltAz      MountKind = iota // azimuth and elevation
	Equatorial                  // hour angle and declination
	Transit                     // declination only: it waits on the meridian
)

// String names the kind.
func (k MountKind) String() string {
	switch k {
	case AltAz:
		return "altaz"
	case Equatorial:
		return "equatorial"
	case Transit:
		return "transit"
	}
	return "mount"
}

// A Mount says how far and how fast a telescope turns. Where two numbers stand, the first is for azimuth or
// hour angle, the second for elevation or declination.
type Mount struct {
	Kind          MountKind
	TravelDeg     [2]float64 // azimuth travel between the stops of an altazimuth mount: 0 is north, through east
	HourAngleDeg  [2]float64 // the others' limits, west positive; both zero: none
	RateDegPerMin [2]float64 // fastest slew
	AccelDegPerS2 [2]float64 // 0: full speed at once
	SettleSec     float64    // after every move
}

// Check says what is wrong with a mount, if anything.
func (m Mount) Check() error {
	switch m.Kind {
	case AltAz:
		if !(m.TravelDeg[0] >= -1080 && m.TravelDeg[0] < m.TravelDeg[1] && m.TravelDeg[1] <= 1080) {
			return fmt.Errorf("azimuth travel %g° to %g°: accepted are -1080 to 1080, the lower end first", m.TravelDeg[0], m.TravelDeg[1])
		}
	case Equatorial, Transit:
		if err := checkHourAngles(m.HourAngleDeg); err != nil {
			return err
		}
		if m.Kind == Transit && m.HourAngleDeg == [2]float64{} {
			return fmt.Errorf("transit mount without hour angle limits: give how long it can follow a source across the meridian")
		}
	default:
		return fmt.Errorf("mount kind %d: accepted are altaz, equatorial, transit", m.Kind)
	}
	for i := range 2 {
		if i == 0 && m.Kind == Transit {
			continue
		}
		if !(m.RateDegPerMin[i] > 0 && m.RateDegPerMin[i] <= 6000) {
			return fmt.Errorf("slew rate %g°/min: accepted are above 0 to 6000", m.RateDegPerMin[i])
		}
		if !(m.AccelDegPerS2[i] >= 0 && m.AccelDegPerS2[i] <= 100) {
			return fmt.Errorf("acceleration %g°/s²: accepted are 0 (full speed at once) to 100", m.AccelDegPerS2[i])
		}
	}
	if !(m.SettleSec >= 0 && m.SettleSec <= 3600) {
		return fmt.Errorf("settling time %g s: accepted are 0 to 3600", m.SettleSec)
	}
	return nil
}

// Limits adds to limits what the mount itself cannot do: follow faster than it turns in azimuth, or leave its
// hour angles.
func (m Mount) Limits(l Limits) Limits {
	if m.Kind == AltAz {
		l.AzimuthDegPerMin = m.RateDegPerMin[0]
	} else {
		l.HourAngleDeg = m.HourAngleDeg
	}
	return l
}

// Axes is where a mount's two axes stand, in degrees: azimuth within its travel and elevation, or hour angle
// and declination.
type Axes struct{ A, B float64 }

// MoveSec returns how long the mount takes from one position to another, in seconds: the slower axis counts,
// and any motion is followed by settling. The path is the shortest in each axis; azimuth is the mount's own, so
// a move never passes a stop. Of many moves, ask the mount's Pace.
//
// Neglects: that both ends move with the sky meanwhile; give the position at arrival
func (m Mount) MoveSec(from, to Axes) float64 {
	p := m.Pace()
	return p.MoveSec(to.A-from.A, to.B-from.B)
}

// A Pace is how fast a mount turns, made ready for a great many moves.
type Pace struct {
	Still     [2]bool // an axis that does not turn
	axes      [2]axisPace
	settleSec float64
}

// Pace returns the mount's.
func (m Mount) Pace() Pace {
	p := Pace{Still: [2]bool{m.Kind == Transit, false}, settleSec: m.SettleSec}
	for i := range p.axes {
		p.axes[i] = newAxisPace(m.RateDegPerMin[i], m.AccelDegPerS2[i])
	}
	return p
}

// MoveSec is Mount.MoveSec for a move by so many degrees on either axis.
func (p *Pace) MoveSec(a, b float64) float64 {
	a, b = math.Abs(a), math.Abs(b)
	var t float64
	switch {
	case p.Slower(0, a, b):
		t = p.axes[0].sec(a)
	case p.Slower(1, b, a):
		t = p.axes[1].sec(b)
	default:
		if t = p.axes[1].sec(b); !p.Still[0] {
			t = max(t, p.axes[0].sec(a))
		}
	}
	if t == 0 {
		return 0
	}
	return t + p.settleSec
}

// Slower says that turning one axis by at least least degrees certainly takes longer than turning the other by at most
// most: it compares bounds, and where they overlap, does not say so. Neither may be negative.
func (p *Pace) Slower(axis int, least, most float64) bool {
	if p.Still[axis] {
		return false
	}
	return p.Still[1-axis] || p.axes[axis].atLeastSec(least) > p.axes[1-axis].atMostSec(most)
}

// axisPace is how fast one axis turns.
type axisPace struct {
	degPerSec float64
	accel     float64 // degrees a second squared
	reachDeg  float64 // what it turns by at least when it comes to full speed; negative: it has full speed at once
	spareSec  float64 // what speeding up and braking then costs
	secPerDeg float64 // at full speed
}

func newAxisPace(degPerMin, a float64) axisPace {
	v := degPerMin / 60
	x := axisPace{degPerSec: v, accel: a, reachDeg: -1, secPerDeg: 1 / v}
	if a != 0 {
		x.reachDeg, x.spareSec = v*v/a, v/a
	}
	return x
}

// sec returns how long the axis takes to turn.
//
//	2 √(θ/a)  while θ ≤ v²/a,  θ/v + v/a  beyond
//
// Given:    θ in degrees, not negative
// Source:   motion with constant acceleration and braking, and a greatest speed
// Checked:  TestMoveSec
func (x *axisPace) sec(theta float64) float64 {
	switch {
	case theta == 0:
		return 0
	case theta <= x.reachDeg:
		return 2 * math.Sqrt(theta/x.accel)
	}
	return theta/x.degPerSec + x.spareSec
}

// roundingShare is more than what rounding does to the bounds below.
const roundingShare = 1e-12

// atMostSec and atLeastSec bound sec without a root or a division: θ/v ≤ 2 √(θ/a) ≤ θ/v + v/a while θ ≤ v²/a.
func (x *axisPace) atMostSec(theta float64) float64 {
	return (theta*x.secPerDeg + x.spareSec) * (1 + roundingShare)
}

func (x *axisPace) atLeastSec(theta float64) float64 {
	t := theta * x.secPerDeg
	if theta > x.reachDeg {
		t += x.spareSec
	}
	return t * (1 - roundingShare)
}

// AxesTrack fills dst with the positions a mount takes to follow a place of the frame f, at from, from + step
// and so on. Azimuth is continuous: at the start it lies in [360·turn, 360·turn + 360). The step must be short
// enough that azimuth changes by less than half a turn in it.
func (s *Site) AxesTrack(m Mount, f *Frame, p Place, from time.Time, step time.Duration, turn int, dst []Axes) {
	for i := range dst {
		at := from.Add(time.Duration(i) * step)
		if m.Kind != AltAz {
			look := s.Look(f, p, at)
			dst[i] = Axes{look.HourAngleDeg, look.DecDeg}
			continue
		}
		az, el := s.AzEl(f, &p, at)
		az += 360 * float64(turn)
		if i > 0 {
			az = dst[i-1].A + half(az-dst[i-1].A, 360)
		}
		dst[i] = Axes{az, el}
	}
}
