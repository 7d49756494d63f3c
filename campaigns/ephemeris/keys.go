package ephemeris

import (
	"regexp"
	"strings"
)

// A form is how the value of a key is written.
type form int

const (
	number form = iota
	text
	hours   // hh:mm:ss.s of right ascension, its error in seconds of time
	degrees // ±dd:mm:ss.s, its error in seconds of arc
)

// A keyword is a key that this package understands.
type keyword struct {
	form form
	unit string
	// hugeIsScaled: a value beyond 1e-7 is in units of 1e-12, and its error too. Files differ in this.
	hugeIsScaled bool
	placeless    bool // understood, but a campaign has no place for it
}

var keywords = map[string]keyword{
	"PSR": {form: text}, "BINARY": {form: text}, "UNITS": {form: text}, "ECL": {form: text},
	"RAJ": {form: hours, unit: "deg"}, "DECJ": {form: degrees, unit: "deg"},
	"ELONG": {unit: "deg"}, "ELAT": {unit: "deg"},
	"PMRA": {unit: "mas/yr"}, "PMDEC": {unit: "mas/yr"}, "PMELONG": {unit: "mas/yr"}, "PMELAT": {unit: "mas/yr"},
	"PX": {unit: "mas"}, "POSEPOCH": {unit: "MJD"}, "PEPOCH": {unit: "MJD"},
	"F0": {unit: "Hz"}, "F1": {unit: "Hz/s"}, "P0": {unit: "s"}, "P1": {unit: "s/s"},
	"DM": {unit: "pc/cm3"},
	"PB": {unit: "d"}, "A1": {unit: "lt-s"}, "T0": {unit: "MJD"}, "TASC": {unit: "MJD"},
	"ECC": {}, "OM": {unit: "deg"}, "EPS1": {}, "EPS2": {},
	"PBDOT": {unit: "s/s", hugeIsScaled: true}, "OMDOT": {unit: "deg/yr"}, "GAMMA": {unit: "s"},
	"FB0": {unit: "Hz"}, "FB1": {unit: "Hz/s"},
	"M2": {unit: "Msun"}, "SINI": {}, "KIN": {unit: "deg"}, "SHAPMAX": {}, "H3": {unit: "s"}, "H4": {unit: "s"}, "STIG": {},
	"START": {unit: "MJD"}, "FINISH": {unit: "MJD"},

	"XDOT": {unit: "lt-s/s", hugeIsScaled: true, placeless: true}, "EDOT": {unit: "1/s", hugeIsScaled: true, placeless: true},
	"EPS1DOT": {unit: "1/s", hugeIsScaled: true, placeless: true}, "EPS2DOT": {unit: "1/s", hugeIsScaled: true, placeless: true},
	"MTOT": {unit: "Msun", placeless: true}, "KOM": {unit: "deg", placeless: true},
}

// aliases are other names of the same parameter.
var aliases = map[string]string{
	"PSRJ": "PSR", "PSRB": "PSR", "NAME": "PSR", "RA": "RAJ", "DEC": "DECJ",
	"LAMBDA": "ELONG", "BETA": "ELAT", "PMLAMBDA": "PMELONG", "PMBETA": "PMELAT",
	"P": "P0", "X": "A1", "E": "ECC", "A1DOT": "XDOT", "STIGMA": "STIG", "VARSIGMA": "STIG", "CLOCK": "CLK",
}

var (
	// higherTerms are those of a series beyond what a campaign takes.
	higherTerms = regexp.MustCompile(`^(F|DM)[0-9]{1,3}$`)
	// orbitTerms are those of the orbital frequency.
	orbitTerms = regexp.MustCompile(`^FB([0-9]|1[0-9])$`)
	// spinTerms are those of the spin that a campaign has no place for.
	spinTerms = regexp.MustCompile(`^F([2-9]|1[0-9])$`)
	glitchKey = regexp.MustCompile(`^GL(EP|PH|F[0-9]|F0D|TD)_[0-9]{1,4}$`)
	// furtherOrbit are the parameters of a second companion and of others beyond it.
	furtherOrbit = regexp.MustCompile(`^(BINARY|PB|FB[0-9]|A1|X|T0|TASC|ECC|E|OM|EPS1|EPS2|PBDOT|OMDOT|XDOT|A1DOT|GAMMA|SINI|M2)_([2-9]|[1-9][0-9])$`)
	// needless keys matter to timing, not to planning.
	needless = regexp.MustCompile(`^(EPHEM|CLK|TRES|NTOA|DMEPOCH|TZR[A-Z]*|DMX.*|JUMP.*|T2E.*)$`)
)

// canonical is the one name of a key.
func canonical(key string) string {
	key = strings.ToUpper(key)
	if name, ok := aliases[key]; ok {
		return name
	}
	return key
}

// known tells how a key is read. What is understood without a place in a campaign is known too.
func known(key string) (keyword, bool) {
	if k, ok := keywords[key]; ok {
		return k, true
	}
	switch {
	case glitchKey.MatchString(key):
		return keyword{}, true
	case orbitTerms.MatchString(key):
		return keyword{unit: "Hz/s^" + key[2:]}, true
	case higherTerms.MatchString(key):
		return keyword{placeless: true}, true
	}
	return keyword{}, false
}
