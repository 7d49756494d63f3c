package sky

import (
	"fmt"
	"math"
	"sort"
)

// A MaskPoint is the height of the horizon in one direction.
type MaskPoint struct {
	AzimuthDeg   float64 // from north through east, 0 to below 360
	ElevationDeg float64
}

// A Mask is the horizon a site sees: straight lines between its points, also from the last one through north
// to the first. One point is a level horizon; none is no mask.
type Mask []MaskPoint

// Check says what is wrong with a mask, if anything: azimuths grow from 0 to below 360, elevations are −10 to 90.
func (m Mask) Check() error {
	for i, p := range m {
		switch {
		case !(p.AzimuthDeg >= 0 && p.AzimuthDeg < 360):
			return fmt.Errorf("horizon mask, point %d: azimuth %g°: accepted are 0 to below 360; the line from the last point to the first runs through north by itself", i+1, p.AzimuthDeg)
		case !(p.ElevationDeg >= -10 && p.ElevationDeg <= 90):
			return fmt.Errorf("horizon mask, point %d: elevation %g°: accepted are -10 to 90", i+1, p.ElevationDeg)
		case i > 0 && p.AzimuthDeg <= m[i-1].AzimuthDeg:
			return fmt.Errorf("horizon mask, point %d: azimuth %g° after %g°: azimuths must grow; begin with the least, the line runs through north by itself", i+1, p.AzimuthDeg, m[i-1].AzimuthDeg)
		}
	}
	return nil
}

// MaskOf makes a mask of pairs of azimuth and elevation, and checks it.
func MaskOf(pairs [][2]float64) (Mask, error) {
	var m Mask
	for _, p := range pairs {
		m = append(m, MaskPoint{p[0], p[1]})
	}
	return m, m.Check()
}

// At returns the horizon's elevation in a direction, degrees. Without a mask it is −90.
func (m Mask) At(azDeg float64) float64 {
	if len(m) == 0 {
		return -90
	}
	azDeg = mod(azDeg, 360)
	return m.line(m.segment(azDeg)).at(azDeg)
}

// segment returns the index of the point that a direction lies at or after: the line from there on holds. It is
// len(m)−1 from the last point through north to the first.
func (m Mask) segment(azDeg float64) int {
	i := sort.Search(len(m), func(i int) bool { return m[i].AzimuthDeg > azDeg })
	return (i + len(m) - 1) % len(m)
}

// maskLine is a straight piece of a mask: elevation + slope × (azimuth − azimuth of its start), degrees.
type maskLine struct{ az, el, slope float64 }

func (m Mask) line(i int) maskLine {
	a, b := m[i], m[(i+1)%len(m)]
	run := b.AzimuthDeg - a.AzimuthDeg
	if run <= 0 {
		run += 360
	}
	return maskLine{a.AzimuthDeg, a.ElevationDeg, (b.ElevationDeg - a.ElevationDeg) / run}
}

// at returns the line's height in a direction on it, whichever turn the direction is counted in.
func (l maskLine) at(azDeg float64) float64 {
	// A direction a hair before the line's start must not become one a turn past it.
	return l.el + l.slope*(mod(azDeg-l.az+maskHair, 360)-maskHair)
}

const maskHair = 1e-6

// span returns the mask's least and greatest elevation.
func (m Mask) span() (least, greatest float64) {
	least, greatest = math.Inf(1), math.Inf(-1)
	for _, p := range m {
		least, greatest = min(least, p.ElevationDeg), max(greatest, p.ElevationDeg)
	}
	return least, greatest
}
