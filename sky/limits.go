package sky

import (
	"fmt"
	"math"
	"strconv"
	"time"
)

// Limits is what keeps a telescope from a place. The zero value keeps it from nothing but what is below
// the horizontal plane; each field says how to leave it out.
type Limits struct {
	LowDeg           float64     // lowest elevation
	HighDeg          float64     // highest elevation; 0 or 90: none
	Mask             Mask        // nil: none
	HourAngleDeg     [2]float64  // west positive; both zero: none
	SunDeg           float64     // least angle from the Sun's centre; 0: none
	AzimuthDegPerMin float64     // fastest the azimuth may change, for an altazimuth mount; 0: none
	Refraction       *Refraction // nil: limits hold for elevations without air, which is the rule
}

// Check says what is wrong with limits, if anything.
func (l Limits) Check() error {
	switch {
	case !(l.LowDeg >= -10 && l.LowDeg < 90):
		return fmt.Errorf("lowest elevation %g°: accepted are -10 to below 90", l.LowDeg)
	case !(l.HighDeg >= 0 && l.HighDeg <= 90):
		return fmt.Errorf("highest elevation %g°: accepted are 0 (none) to 90", l.HighDeg)
	case l.HighDeg != 0 && l.HighDeg <= l.LowDeg:
		return fmt.Errorf("highest elevation %g°: it must lie above the lowest, %g°", l.HighDeg, l.LowDeg)
	case !(l.SunDeg >= 0 && l.SunDeg < 180):
		return fmt.Errorf("Sun limit %g°: accepted are 0 (none) to below 180", l.SunDeg)
	case !(l.AzimuthDegPerMin >= 0):
		return fmt.Errorf("azimuth rate %g°/min: it must not be negative", l.AzimuthDegPerMin)
	}
	if err := checkHourAngles(l.HourAngleDeg); err != nil {
		return err
	}
	return l.Mask.Check()
}

func checkHourAngles(h [2]float64) error {
	if h == [2]float64{} {
		return nil
	}
	if !(h[0] >= -180 && h[0] < h[1] && h[1] <= 180) {
		return fmt.Errorf("hour angle limits %g° to %g°: accepted are -180 to 180, west positive, the eastern limit first", h[0], h[1])
	}
	return nil
}

// CauseKind is the closed set of what opens and closes a window.
type CauseKind int

// The kinds.
const (
	Interval      CauseKind = iota // an end of the interval that was asked for
	LowElevation                   // the lowest elevation
	HighElevation                  // the highest elevation
	HorizonMask                    // the horizon mask
	SunDistance                    // the angle from the Sun
	HourAngle                      // an hour angle limit of the mount
	AzimuthRate                    // azimuth changes faster than the mount can follow
	AzimuthStop                    // an end of the azimuth travel
)

// A Cause is what opens or closes a window.
type Cause struct {
	Kind CauseKind
	Deg  float64 // the limit's value there, degrees (degrees a minute for AzimuthRate); 0 for Interval
}

// String names the cause in plain words: "elevation 8°".
func (c Cause) String() string {
	parts := 1000.0
	if c.Kind == HorizonMask {
		parts = 10 // a point on a line, not a number somebody chose
	}
	n := strconv.FormatFloat(math.Round(c.Deg*parts)/parts, 'f', -1, 64)
	switch c.Kind {
	case Interval:
		return "end of the interval"
	case LowElevation:
		return "elevation " + n + "°"
	case HighElevation:
		return "upper elevation limit " + n + "°"
	case HorizonMask:
		return "horizon mask " + n + "°"
	case SunDistance:
		return "Sun " + n + "°"
	case HourAngle:
		return "hour angle limit " + n + "°"
	case AzimuthRate:
		return "azimuth rate " + n + "°/min"
	case AzimuthStop:
		return "azimuth stop " + n + "°"
	}
	return "cause " + strconv.Itoa(int(c.Kind))
}

// A Window is a stretch of time in which every limit is kept, and what opens and closes it.
type Window struct {
	From, To          time.Time
	OpensBy, ClosesBy Cause
}
