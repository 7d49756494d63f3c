package campaigns

import (
	"sync/atomic"
	"time"

	"example.org/tallystick/sky"
	"example.org/tallystick/sky/orbit"
)

// A clock turns the observatory's time into the time in which a source's ephemeris is given: TDB at the
// solar-system barycentre, and for a binary the time at which the pulses left its orbit.
type clock struct {
	target sky.Target
	orbit  *orbit.Orbit // nil for a source without one
	frames *frames
}

// barycentreMJD is TDB at the barycentre when a wave front that is at the observatory at t passes there.
func (c *clock) barycentreMJD(t time.Time) float64 {
	return tdbMJD(t) + c.lightSec(t)/secPerDay
}

// orbitMJD is when what is heard at t left the orbit.
func (c *clock) orbitMJD(t time.Time) float64 {
	return c.orbit.FromObservatory(tdbMJD(t), c.lightSec(t))
}

// heardAt is when something that left the orbit is heard at the observatory.
func (c *clock) heardAt(orbitMJD float64) time.Time {
	t := utcOf(orbitMJD)
	// The Earth moves at a ten-thousandth of the speed of light: of ten minutes' error each round leaves as much.
	for range 3 {
		t = utcOf(c.orbit.ToObservatory(orbitMJD, c.lightSec(t)))
	}
	return t
}

// reach is more than orbit time and the observatory's can differ by: the Earth's light time to the barycentre, at
// most 505 s, that across the orbit, and a minute between TDB and UTC.
func (c *clock) reach() time.Duration {
	size := c.orbit.SemimajorLs * (1 + c.orbit.Eccentricity)
	return 15*time.Minute + time.Duration(size*float64(time.Second))
}

// lightSec is by how much earlier a wave front is at the Earth at t than at the barycentre.
func (c *clock) lightSec(t time.Time) float64 {
	frame, at := c.frames.near(t)
	return frame.RoemerSecAt(c.target, at)
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

// frames keeps a day's frame once it has been made. Goroutines may ask it side by side.
type frames struct {
	pages [1 + (lastDay-firstDay)/framesInPage]atomic.Pointer[framePage]
}

// A framePage holds the frames of some days, each once it has been asked for.
type framePage [framesInPage]atomic.Pointer[sky.Frame]

const framesInPage = 256

func newFrames() *frames { return &frames{} }

// The first and last day that frames are made for, modified Julian dates: inside what sky works out. A log line
// from before it is given the light time of the first day, which is wrong by minutes and harms nobody.
const firstDay, lastDay = 41318, 88067

// at is the frame of noon of the day of t.
func (f *frames) at(t time.Time) *sky.Frame {
	frame, _ := f.near(t)
	return frame
}

// near is the frame of noon of the day of t, and t or, outside the days that frames are made for, the nearest of them.
func (f *frames) near(t time.Time) (*sky.Frame, time.Time) {
	mjd := sky.MJD(t)
	day := min(max(int(mjd), firstDay), lastDay)
	if mjd < firstDay || mjd > lastDay+1 {
		t = sky.TimeOfMJD(float64(day) + 0.5)
	}
	if have := f.of(day); have != nil {
		return have, t
	}
	fr, err := sky.NewFrameBeside(sky.TimeOfMJD(float64(day)+0.5), f.of(day-2), f.of(day-1), f.of(day+1), f.of(day+2))
	if err != nil {
		panic("campaigns: " + err.Error()) // the days are within what sky works out
	}
	f.keep(day, fr)
	return fr, t
}

// of is a day's frame, or nil while it has not been made.
func (f *frames) of(day int) *sky.Frame {
	if day < firstDay || day > lastDay {
		return nil
	}
	page := f.pages[(day-firstDay)/framesInPage].Load()
	if page == nil {
		return nil
	}
	return page[(day-firstDay)%framesInPage].Load()
}

// keep keeps a day's frame. Where two goroutines have made one, they are the same.
func (f *frames) keep(day int, frame *sky.Frame) {
	at := &f.pages[(day-firstDay)/framesInPage]
	page := at.Load()
	if page == nil {
		at.CompareAndSwap(nil, new(framePage))
		page = at.Load()
	}
	page[(day-firstDay)%framesInPage].Store(frame)
}
