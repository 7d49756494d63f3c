package radiometer

import (
	"fmt"
	"math"
)

// A Reason says why no amount of time gives a wanted arrival-time error.
type Reason int

// The reasons.
const (
	BelowFloor Reason = iota // the aim is at or below the source's floor
	NotHeard                 // below the horizon, or flux, period or receiver unknown
	BadAim                   // the aim is not a positive number
)

// NoAnswer is the error of MinutesFor: more time would not help.
type NoAnswer struct {
	Reason  Reason
	AimUs   float64
	FloorUs float64
	Cause   error // with NotHeard: what Check says; nil when the source is below the horizon
}

// Error says in plain words why there is no answer.
func (n NoAnswer) Error() string {
	switch {
	case n.Reason == BelowFloor:
		return fmt.Sprintf("no answer: an error of %g µs is wanted, but the floor is %g µs; no amount of time goes below it", n.AimUs, n.FloorUs)
	case n.Reason == BadAim:
		return fmt.Sprintf("no answer: found an aim of %g µs; accepted above 0", n.AimUs)
	case n.Cause != nil:
		return fmt.Sprintf("no answer: the expected signal is not known: %v", n.Cause)
	}
	return "no answer: the source is below the horizon"
}

// Unwrap returns the cause.
func (n NoAnswer) Unwrap() error { return n.Cause }

// MinutesFor returns the minutes needed at an elevation for a wanted arrival-time error.
//
//	t = (a² + j²)/(aim² − floor²)
//
// a and j being the errors from radiometer noise and jitter in one unit of time.
//
// Returns: minutes, or a NoAnswer: an aim at or below the floor has none
// Checked: TestMinutesFor, TestMinutesForIsTheWayBack
func (s Setup) MinutesFor(toaUs, elevationDeg float64) (float64, error) {
	floor := s.Pulsar.FloorUs
	if !(toaUs > 0) || math.IsInf(toaUs, 0) {
		return 0, NoAnswer{Reason: BadAim, AimUs: toaUs, FloorUs: floor}
	}
	if toaUs <= floor {
		return 0, NoAnswer{Reason: BelowFloor, AimUs: toaUs, FloorUs: floor}
	}
	hour := s.hourErrorUs(elevationDeg)
	if math.IsInf(hour, 1) {
		return 0, NoAnswer{Reason: NotHeard, AimUs: toaUs, FloorUs: floor, Cause: s.Check()}
	}
	return 60 * hoursFor(toaUs, hour, floor), nil
}

func hoursFor(aimUs, hourUs, floorUs float64) float64 {
	return hourUs * hourUs / ((aimUs - floorUs) * (aimUs + floorUs))
}
