// Package ephemeris reads the keyword-value ephemeris files of pulsar timing, one parameter a line, and
// writes what a campaign needs of them as a [[source]] entry.
//
// Most readers need Read and File.Source. ParseLine reads a single line.
//
// Conventions. A line is `KEY value [fit] [sigma]`. Numbers keep the digits that the file gives: where a
// value is carried over it is carried as text, and where it must be changed (from TCB to TDB, from a
// frequency to a period) that is done with more digits than the file has. What is derived, assumed, left out
// or in contradiction is said in a Remark, and beside the number in the entry.
package ephemeris
