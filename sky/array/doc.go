// Package array says what hours are worth to a set of pulsars timed together: how well pairs of them show a
// background of gravitational waves, what more time, more pulsars and less noise gain, and how hours are best
// divided.
//
// Most readers need Share, which divides hours so that one more is worth the same on every pulsar, and Pair, which
// gives the merit of a set. Arrival-time errors are in µs, times in hours, angles in degrees. Noise is white
// throughout: errors of separate hours are independent, down to a floor.
package array
