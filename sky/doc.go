// Package sky says where a source stands, seen from a site: azimuth and elevation, when it can be observed and
// what opens and closes each window, how long the mount takes to get there.
//
// Most readers need this:
//
//	site, err := sky.NewSite(38.21, -4.63, 812, 0) // latitude, longitude (east), height, UT1−UTC
//	frame, err := sky.NewFrame(middleOfSession)    // what is the same for every source and site
//	place := frame.Place(sky.Target{RADeg: 33.53, DecDeg: 33.37})
//	look := site.Look(frame, place, at)
//	windows := site.Windows(frame, place, from, to, mount.Limits(limits))
//	turns := site.Turns(mount, frame, place, from, to)
//
// # Conventions
//
// Longitude is positive east. Azimuth runs from north through east, 0 to 360; hour angle is positive west,
// −180 to 180. At a geographic pole azimuth follows from the longitude given. Instants are UTC; a name carries its
// unit. A Place belongs to the frame that made it. Nothing here reads a clock or a file, nothing changes once
// made: all of it may be shared.
//
// # Promises
//
// Checked against the IAU 2006/2000A routines in testdata, years 2020 to 2035, every latitude, from a frame up to
// 12 hours away:
//
//	azimuth × cos el, elevation     0.05 arcsec, median 0.01
//	hour angle, parallactic angle   0.2 arcsec (scaled by cos dec, by the smaller of cos el and cos dec)
//	rise, set, crossings of limits  the same events; within 0.05 s + 0.05 arcsec / elevation rate
//	place of the Sun                0.2 arcsec; elongation 1 arcsec
//	sidereal time                   0.002 s
//	radio refraction                0.01 arcsec against its formula; the air itself differs by more
//	barycentric light time          0.05 s
//
// Between the years 1972 and 2099 this holds but for what leap seconds to come and the Earth's turning do: a
// second of UT1−UTC is 15 arcsec of hour angle, and each site takes its own.
//
// # Neglected
//
// Polar motion, 0.3 arcsec. Parallax of stars, under 1 mas beyond 1 kpc. What the nutation theory of 2000 added,
// 0.01 arcsec. The bending of light by planets. Refraction (0.1° at 10°) unless Limits carry one: limits are
// meant for elevations without air.
package sky
