package ephemeris

import (
	"math/big"
	"strings"
)

const secPerDay = 86400

// A timeScale is TDB or TCB. TCB seconds are shorter: dates and everything counted in seconds change. Dispersion,
// proper motion and the advance of periastron are left as they are: they would change by 1.6e-8 of themselves, far
// inside their errors.
type timeScale struct{ tcb bool }

// timeScale says what UNITS says. A file that does not say is taken for TDB, with a remark, since TCB is 21 s off.
func (f *File) timeScale() timeScale {
	units := f.line("UNITS")
	switch {
	case units == nil:
		f.remark(0, "no UNITS: its times are taken for TDB; if they are TCB, add a line `UNITS TCB` (in 2020 they are 21 s apart)")
	case strings.EqualFold(units.Text, "TCB"):
		f.remark(units.Number, "UNITS TCB: epochs, periods and frequencies are changed to TDB")
		return timeScale{tcb: true}
	case !strings.EqualFold(units.Text, "TDB"):
		f.remark(units.Number, "UNITS %s is not known; accepted: TDB, TCB; its times are taken for TDB", plain(units.Text))
	}
	return timeScale{}
}

// Of IAU 2006 resolution B3: the rate L_B, the date of no difference and TDB0 in seconds.
const tcbRate, tcbOrigin, tdbZeroSec = "1.550519768e-8", "43144.0003725", "-6.55e-5"

// epoch brings a date to TDB.
//
//	TDB = TCB − L_B (TCB − 43144.0003725) + TDB0
//
// Source:  IAU 2006 resolution B3
// Checked: TestTimeScales
func (s timeScale) epoch(d decimal) decimal {
	if !s.tcb {
		return d
	}
	x := d.big()
	since := new(big.Float).Sub(x, bigOf(tcbOrigin))
	x.Sub(x, since.Mul(since, bigOf(tcbRate)))
	zero := bigOf(tdbZeroSec)
	return d.inDays(x.Add(x, zero.Quo(zero, bigOf("86400"))))
}

// length brings a length of time, or a light time, to TDB; power −1 does so for a frequency, −2 for its
// derivative.
//
//	P_TDB = P_TCB (1 − L_B)
//
// Source:  IAU 2006 resolution B3
// Checked: TestTimeScales
func (s timeScale) length(d decimal, power int) decimal {
	if !s.tcb || d.value == 0 {
		return d
	}
	x := d.big()
	factor := bigOf("1")
	factor.Sub(factor, bigOf(tcbRate))
	for range max(power, -power) {
		if power > 0 {
			x.Mul(x, factor)
		} else {
			x.Quo(x, factor)
		}
	}
	return d.inDigits(x)
}
