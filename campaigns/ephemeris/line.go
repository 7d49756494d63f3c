package ephemeris

import (
	"fmt"
	"math/big"
	"strconv"
	"strings"
)

// A Line is one parameter as its line gives it.
type Line struct {
	Key    string  // the one name of the parameter, capital letters: E is ECC, LAMBDA is ELONG
	Text   string  // the value: a word, or a number with every digit that was written
	Value  float64 // as a number, angles in degrees; 0 for a word
	Unit   string  // of Value and Sigma; "text" for a word
	Fit    string  // the fit flag, 0, 1 or 2; empty where there is none
	Sigma  float64 // 0 where none is given
	Number int     // the line's, counted from 1; 0 from ParseLine

	written string  // the line itself
	exact   decimal // the value; of a word nothing
	sigma   decimal
	// An angle in parts, as written but with seconds below 60.
	parts string
}

// ParseLine reads one line. ok is false where there is no parameter: an empty line, or a comment, which begins
// with # or with a lone C. A key that is not known is read as a word. The error says what is wrong with a value.
//
// A third word that is exactly 0, 1 or 2 is the fit flag and the error follows; any other is the error itself.
// The error of a right ascension is in seconds of time, that of a declination in seconds of arc: Sigma is in
// degrees. PBDOT, XDOT, EDOT and their like beyond 1e-7 are in units of 1e-12, value and error alike.
func ParseLine(line string) (l Line, ok bool, err error) {
	words := strings.Fields(line)
	if len(words) == 0 || strings.HasPrefix(words[0], "#") || strings.EqualFold(words[0], "C") {
		return Line{}, false, nil
	}
	for i, w := range words {
		if strings.HasPrefix(w, "#") {
			words = words[:i]
			break
		}
	}
	l = Line{Key: canonical(words[0]), Unit: "text", written: line}
	k, isKnown := known(l.Key)
	if len(words) < 2 {
		if !isKnown {
			return l, true, nil
		}
		return l, true, fmt.Errorf("%s: found no value; accepted: a value after the key", l.Key)
	}
	l.Text = words[1]
	if !isKnown || k.form == text || l.Key == "SINI" && strings.EqualFold(l.Text, "KIN") {
		return l, true, nil
	}
	l.Unit = k.unit
	if err := l.readValue(k); err != nil {
		l.parts, l.Value = "", 0
		return l, true, err
	}
	err = l.readSigma(words[2:])
	l.scale(k)
	return l, true, err
}

func (l *Line) readValue(k keyword) error {
	var ok bool
	switch k.form {
	case hours:
		if l.parts, l.Value, ok = sexagesimal(l.Text, 24); !ok || strings.HasPrefix(l.parts, "-") {
			return fmt.Errorf("%s: found %s; accepted: hours, minutes and seconds, as 07:37:51.25", l.Key, quote(l.Text))
		}
		l.Value *= 15
	case degrees:
		if l.parts, l.Value, ok = sexagesimal(l.Text, 360); !ok || l.Value < -90 || l.Value > 90 {
			return fmt.Errorf("%s: found %s; accepted: degrees, minutes and seconds within ±90 degrees, as -30:39:40.7", l.Key, quote(l.Text))
		}
	default:
		if l.exact, ok = parseDecimal(l.Text); !ok {
			return fmt.Errorf("%s: found %s; accepted: a number", l.Key, quote(l.Text))
		}
		l.Text, l.Value = l.exact.text, l.exact.value
	}
	return nil
}

func (l *Line) readSigma(words []string) error {
	if len(words) > 0 && (words[0] == "0" || words[0] == "1" || words[0] == "2") {
		l.Fit, words = words[0], words[1:]
	}
	if len(words) == 0 {
		return nil
	}
	s, ok := parseDecimal(words[0])
	if !ok || s.value < 0 {
		return fmt.Errorf("%s: found %s as its error; accepted: a number of 0 or more; the error is taken as not known", l.Key, quote(words[0]))
	}
	l.sigma, l.Sigma = s, s.value
	return nil
}

// scale gives value and error their units.
func (l *Line) scale(k keyword) {
	switch {
	case k.form == hours:
		l.Sigma = l.Sigma * 15 / 3600
	case k.form == degrees:
		l.Sigma /= 3600
	case k.hugeIsScaled && (l.Value > 1e-7 || l.Value < -1e-7):
		l.exact = l.exact.shifted(-12)
		l.Text, l.Value = l.exact.text, l.exact.value
		if l.sigma.text != "" {
			l.sigma = l.sigma.shifted(-12)
			l.Sigma = l.sigma.value
		}
	}
}

// isText says that the value is a word.
func (l *Line) isText() bool { return l.Unit == "text" }

// sexagesimal reads two or three parts, each a sixtieth of the one before; only the last may have decimals. The
// sign belongs to the whole. Seconds of 60 are carried over. The first part stays below the circle; of 24 hours
// none are left.
func sexagesimal(written string, circle int64) (parts string, value float64, ok bool) {
	rest, sign := written, ""
	if rest != "" && (rest[0] == '+' || rest[0] == '-') {
		sign, rest = rest[:1], rest[1:]
	}
	p := strings.Split(rest, ":")
	if len(p) < 2 || len(p) > 3 || len(rest) > longestNumber {
		return "", 0, false
	}
	if len(p) == 2 {
		p = append(p, "00")
	}
	seconds, ok := parseDecimal(p[2])
	first, err1 := strconv.ParseUint(p[0], 10, 16)
	minutes, err2 := strconv.ParseUint(p[1], 10, 16)
	if !ok || err1 != nil || err2 != nil || strings.Trim(p[2], "0123456789.") != "" || minutes > 59 || seconds.value > 60 || int64(first) >= circle {
		return "", 0, false
	}
	_, decimals, _ := strings.Cut(p[2], ".")
	if seconds.value == 60 {
		seconds = decimal{"0", 0}
		if minutes++; minutes == 60 {
			minutes, first = 0, first+1
		}
		first %= uint64(circle)
		p[2] = "00"
		if decimals != "" {
			p[2] += "." + strings.Repeat("0", len(decimals))
		}
	}
	p[2] = strings.TrimSuffix(p[2], ".")
	if strings.HasPrefix(p[2], ".") {
		p[2] = "0" + p[2]
	}
	// In one sum with more digits than a float64 has: an angle of many digits is rounded once.
	sum := new(big.Float).SetPrec(workingBits).SetUint64(first*3600 + minutes*60)
	sum.Add(sum, seconds.big())
	value, _ = sum.Quo(sum, bigOf("3600")).Float64()
	if sign == "-" {
		value = -value
	}
	return fmt.Sprintf("%s%02d:%02d:%s", sign, first, minutes, p[2]), value, true
}

// quote shows what was found, cut short where it is long.
func quote(s string) string {
	if len(s) > 40 {
		s = s[:40] + "..."
	}
	return strconv.Quote(s)
}
