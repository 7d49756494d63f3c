//go:build !race

package main

// raceDetector says that the tests run with it, and so ten times slower.
const raceDetector = false
