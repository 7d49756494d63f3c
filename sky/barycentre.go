package sky

import (
	"time"
)

// barycentric returns the Earth's centre as seen from the barycentre of the solar system, in au, ICRS axes, x days
// after the frame's instant.
func (f *Frame) barycentric(x float64) vec {
	var r vec
	for i := range r {
		at := func(k int) float64 { return f.nodes[k].earth[i] + f.nodes[k].wobble[i] }
		c0, c1, c2 := parabola(at(0), at(1), at(2))
		r[i] = c0 + x*(c1+x*c2)
	}
	return r
}

// RoemerSecAt returns by how much earlier a signal from a target passes the Earth's centre than the barycentre of
// the solar system, at an instant within FrameReach of the frame's, in seconds: within ±500.
//
//	r · n / c
//
// Given:    r from the barycentre to the Earth's centre, n the unit vector to the target
// Neglects: the site's place on the Earth (21 ms), parallax (1 ms at 1 kpc), the Sun's Shapiro delay (0.1 ms),
// 1 ms in the Earth's place; 0.03 s in all, which is 1e−6 turns of a 0.5-day orbit
// Source:   Edwards, Hobbs & Manchester 2006, MNRAS 372, 1549, section 2.3
// Checked:  TestBarycentre (BAR-010 to BAR-017)
func (f *Frame) RoemerSecAt(t Target, at time.Time) float64 {
	return f.barycentric(f.days(at)).dot(t.direction(f.nodes[1].days)) * lightTimeAU
}
