package outside

import (
	"fmt"
	"math"
	"strconv"
)

// agrees says whether a result is what a printed number wants, by one kind of tolerance:
//
//	abs    it differs by no more than tol
//	rel    it differs by no more than tol times the number
//	upper  it stays below the number
//	ratio  result/number and its inverse are both no more than tol
func agrees(got float64, printed, kind string, tol float64) (bool, error) {
	want, err := strconv.ParseFloat(printed, 64)
	if err != nil {
		return false, err
	}
	off := math.Abs(got - want)
	switch kind {
	case "abs":
		return off <= max(tol, lastDigit(printed)), nil
	case "rel":
		return off <= max(tol*math.Abs(want), lastDigit(printed)), nil
	case "upper":
		return got < want, nil
	case "ratio":
		return got/want <= tol && want/got <= tol, nil
	}
	return false, fmt.Errorf("tolerance kind %q cannot be compared number by number; accepted abs, rel, upper, ratio", kind)
}
