package campaigns

import (
	"fmt"
	"strconv"
	"strings"
)

const (
	acceptedRA  = "hours, minutes and seconds such as \"02:14:07.812\", or a number of degrees from 0 to below 360"
	acceptedDec = "degrees, minutes and seconds such as \"+33:22:10.44\", or a number of degrees from -90 to 90"
)

// ParseRADeg reads a right ascension that is written as hours, minutes and seconds, "02:14:07.812" or
// "02 14 07.812" (the seconds, or minutes and seconds, may be missing), and returns degrees within [0, 360).
func ParseRADeg(text string) (float64, error) {
	hours, negative, err := sexagesimal(text)
	if err != nil || negative || hours >= 24 {
		return 0, fmt.Errorf("found %q as right ascension; accepted: %s", text, acceptedRA)
	}
	return hours * 15, nil
}

// ParseDecDeg reads a declination that is written as degrees, minutes and seconds of arc, "+33:22:10.44" or
// "+33 22 10.44", and returns degrees within ±90. The sign belongs to the whole angle, also of "-00:30".
func ParseDecDeg(text string) (float64, error) {
	deg, negative, err := sexagesimal(text)
	if err != nil || deg > 90 {
		return 0, fmt.Errorf("found %q as declination; accepted: %s", text, acceptedDec)
	}
	if negative {
		deg = -deg
	}
	return deg, nil
}

// sexagesimal reads up to three parts, each a sixtieth of the one before. Only the last may have decimals.
func sexagesimal(text string) (value float64, negative bool, err error) {
	bad := fmt.Errorf("found %q; accepted: two or three parts such as 02:14:07.8", text)
	rest := strings.TrimSpace(text)
	if rest != "" && (rest[0] == '+' || rest[0] == '-') {
		negative = rest[0] == '-'
		rest = rest[1:]
	}
	parts := strings.Split(rest, ":")
	if len(parts) == 1 {
		parts = strings.Fields(rest)
	}
	if len(parts) < 2 || len(parts) > 3 {
		return 0, false, bad
	}
	var x [3]float64
	for i, part := range parts {
		for _, c := range part {
			if (c < '0' || c > '9') && (c != '.' || i < len(parts)-1) {
				return 0, false, bad
			}
		}
		if x[i], err = strconv.ParseFloat(part, 64); err != nil || i > 0 && x[i] >= 60 {
			return 0, false, bad
		}
	}
	return x[0] + x[1]/60 + x[2]/3600, negative, nil
}

// angle reads a right ascension or a declination: a text in parts, or a number of degrees.
func (t *table) angle(key, accepted string, b bounds, parse func(string) (float64, error)) float64 {
	v, ok := t.ask(key, true, accepted)
	if !ok {
		return 0
	}
	if text, ok := v.(string); ok {
		deg, err := parse(text)
		if err != nil {
			t.complain(key, describe(v), accepted, quotedNumber(v))
		}
		return deg
	}
	deg, ok := asNumber(v)
	if !ok || !b.holds(deg) {
		t.complain(key, describe(v), accepted, "")
		return 0
	}
	return deg
}

func (t *table) ra(key string) float64 { return t.angle(key, acceptedRA, below(0, 360), ParseRADeg) }
func (t *table) dec(key string) float64 {
	return t.angle(key, acceptedDec, between(-90, 90), ParseDecDeg)
}
