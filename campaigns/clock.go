package campaigns

import (
	"time"

	"example.org/tallystick/sky"
	"example.org/tallystick/sky/orbit"
)

// A clock turns the observatory's time into the time in which a source's ephemeris is given: TDB at the
// solar-system barycentre, and for a binary the time at which the pulses left its orbit.
//
// The Earth's place is taken once a day; in half a day its light time to a source changes by 4 s at
// most, 0.0008 turns of a 90-minute orbit.
type clock struct {
	target sky.Target
	orbit  *orbit.Orbit // nil for a source without one
	frames *frames
}

// barycentreMJD is TDB at the barycentre when a wave front that is at the observatory at t passes there.
func (c *clock) barycentreMJD(t time.Time) float64 {
	return tdbMJD(t) + c.frames.at(t).RoemerSec(c.target)/secPerDay
}

// orbitMJD is when what is heard at t left the orbit.
func (c *clock) orbitMJD(t time.Time) float64 {
	return c.orbit.FromObservatory(tdbMJD(t), c.frames.at(t).RoemerSec(c.target))
}

// heardAt is when something that left the orbit is heard at the observatory. The result is within a day
// of near, whose Earth it uses.
func (c *clock) heardAt(orbitMJD float64, near time.Time) time.Time {
	tdb := c.orbit.ToObservatory(orbitMJD, c.frames.at(near).RoemerSec(c.target))
	return utcOf(tdb)
}

const secPerDay = 86400

// tdbMJD is the modified Julian date of an instant in TDB.
func tdbMJD(t time.Time) float64 {
	mjd := sky.MJD(t)
	return mjd + (sky.TTMinusUTCSec(t)+sky.TDBMinusTTSec(mjd))/secPerDay
}

// utcOf is the way back.
func utcOf(tdb float64) time.Time {
	t := sky.TimeOfMJD(tdb)
	return sky.TimeOfMJD(tdb - (sky.TTMinusUTCSec(t)+sky.TDBMinusTTSec(tdb))/secPerDay)
}

// frames keeps a day's frame once it has been made.
type frames struct{ byDay map[int]*sky.Frame }

func newFrames() *frames { return &frames{byDay: map[int]*sky.Frame{}} }

// The first and last day that frames are made for, modified Julian dates: inside what sky works out. A log line
// from before it is given the light time of the first day, which is wrong by minutes and harms nobody.
const firstDay, lastDay = 41318, 88067

// at is the frame of noon of the day of t.
func (f *frames) at(t time.Time) *sky.Frame {
	day := min(max(int(sky.MJD(t)), firstDay), lastDay)
	if fr, ok := f.byDay[day]; ok {
		return fr
	}
	fr, err := sky.NewFrame(sky.TimeOfMJD(float64(day) + 0.5))
	if err != nil {
		panic("campaigns: " + err.Error()) // the days are within what sky works out
	}
	f.byDay[day] = fr
	return fr
}
