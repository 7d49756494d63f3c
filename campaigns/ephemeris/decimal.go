package ephemeris

import (
	"math"
	"math/big"
	"strconv"
	"strings"
)

// A decimal is a number with the digits it was written with.
type decimal struct {
	text  string // as TOML takes it: no plus sign, a digit before the point, e for the exponent
	value float64
}

// longestNumber is the most characters a number may have: no published value has a third of them.
const longestNumber = 100

// parseDecimal reads a number as it stands in these files: with an exponent marked by e or d in either case, a
// sign, perhaps no digit before or after the point. It refuses what is no finite number.
func parseDecimal(word string) (decimal, bool) {
	if word == "" || len(word) > longestNumber {
		return decimal{}, false
	}
	rest, sign := word, ""
	if rest[0] == '+' || rest[0] == '-' {
		sign, rest = strings.Trim(rest[:1], "+"), rest[1:]
	}
	exponent := 0
	if i := strings.IndexAny(rest, "eEdD"); i >= 0 {
		n, err := strconv.Atoi(rest[i+1:])
		if err != nil || n < -400 || n > 400 {
			return decimal{}, false
		}
		exponent, rest = n, rest[:i]
	}
	whole, part, _ := strings.Cut(rest, ".")
	if whole+part == "" || strings.Trim(whole+part, "0123456789") != "" {
		return decimal{}, false
	}
	return compose(sign, whole, part, exponent)
}

func compose(sign, whole, part string, exponent int) (decimal, bool) {
	whole = strings.TrimLeft(whole, "0")
	if whole == "" {
		whole = "0"
	}
	text := sign + whole
	if part != "" {
		text += "." + part
	}
	if exponent != 0 {
		text += "e" + strconv.Itoa(exponent)
	}
	value, err := strconv.ParseFloat(text, 64)
	if err != nil || math.IsInf(value, 0) {
		return decimal{}, false
	}
	if len(whole) > 15 && part == "" && exponent == 0 {
		text += ".0" // else TOML takes it for an integer, which ends at 63 bits
	}
	return decimal{text, value}, true
}

// shifted is the number times a power of ten, digit for digit.
func (d decimal) shifted(powerOfTen int) decimal {
	mantissa, exponent, _ := strings.Cut(d.text, "e")
	n, _ := strconv.Atoi(exponent) // no exponent is 0
	text := mantissa
	if n += powerOfTen; n != 0 {
		text += "e" + strconv.Itoa(n)
	}
	value, _ := strconv.ParseFloat(text, 64)
	return decimal{text, value}
}

// workingBits is how exact changed numbers are worked out: 60 digits.
const workingBits = 200

func (d decimal) big() *big.Float { return bigOf(d.text) }

func bigOf(text string) *big.Float {
	x, _, err := big.ParseFloat(text, 10, workingBits, big.ToNearestEven)
	if err != nil {
		return new(big.Float).SetPrec(workingBits)
	}
	return x
}

// inDays writes a date or a length in days with at least as many decimals as d has, and at least 12: 0.1 µs.
func (d decimal) inDays(x *big.Float) decimal {
	return written(x.Text('f', max(12, d.decimals()+1)))
}

// decimals is how many digits it has behind the point; of a number with an exponent 12.
func (d decimal) decimals() int {
	if strings.Contains(d.text, "e") {
		return 12
	}
	_, part, _ := strings.Cut(d.text, ".")
	return len(part)
}

// inDigits writes a number with two significant digits more than d has, and at least 17.
func (d decimal) inDigits(x *big.Float) decimal {
	mantissa, _, _ := strings.Cut(d.text, "e")
	digits := len(strings.TrimLeft(strings.Trim(mantissa, "-"), "0."))
	return written(x.Text('g', max(17, digits+2)))
}

// written takes trailing zeros off a number that was worked out.
func written(text string) decimal {
	mantissa, exponent, scaled := strings.Cut(text, "e")
	if strings.Contains(mantissa, ".") {
		mantissa = strings.TrimSuffix(strings.TrimRight(mantissa, "0"), ".")
	}
	if scaled {
		mantissa += "e" + exponent
	}
	if d, _ := parseDecimal(mantissa); d.value != 0 {
		return d
	}
	return decimal{"0", 0} // also for -0
}

// rounded is a worked-out number with so many significant digits.
func rounded(x float64, digits int) decimal { return written(strconv.FormatFloat(x, 'g', digits, 64)) }
