package ephemeris

import (
	"cmp"
	"fmt"
	"math"
	"strconv"
	"strings"
)

// A source is what an entry is written from.
type source struct {
	place      place
	spin       *rotation
	glitch     decimal
	orbit      *binary
	orbitFault string
}

// The aim that every entry starts with, since a source without one is never observed.
const (
	StarterEveryDays = 14
	StarterMinutes   = 30
)

// Source writes the [[source]] entry. Its numbers have the units that their keys name; what is derived or assumed is
// said beside them. The aim is a start that only whoever runs the campaign can set right.
func (f *File) Source() string {
	w := &entry{}
	w.comment("%s, from %s: %s used, %d not needed for planning, %d not known.", f.Name, f.base(), lines(f.Used), f.Needless, f.Unknown)
	if a, b := f.line("START"), f.line("FINISH"); a != nil && b != nil {
		w.comment("It was fitted to observations from MJD %s to %s.", a.Text, b.Text)
	}
	w.plain("[[source]]")
	w.set("name", strconv.Quote(f.Name), "")
	f.writePlace(w)
	if l := f.line("PX"); l != nil && l.Value > 0 {
		w.number("parallax_mas", l.exact, 0, 1000, "")
	}
	if l := f.line("DM"); l != nil {
		w.number("dm_pc_per_cm3", l.exact, 0, 10000, "")
	}
	w.number("glitch_mjd", f.source.glitch, firstMJD, lastMJD, "the last glitch of the file")
	if f.source.orbitFault != "" {
		w.comment("A binary, but its orbit is left out: %s", strings.ReplaceAll(f.source.orbitFault, "\n", "; "))
	}
	f.writeSpin(w)
	f.writeOrbit(w)
	w.plain("")
	w.comment("A start: say here how often, and for how long, this source is wanted.")
	w.plain("[[source.aim]]")
	w.set("kind", `"cadence"`, "")
	w.set("every_days", strconv.Itoa(StarterEveryDays), "")
	w.set("minutes", strconv.Itoa(StarterMinutes), "or toa_us, once flux and width_ms are given")
	f.writeUnknown(w)
	return w.String()
}

func (f *File) writePlace(w *entry) {
	p := f.source.place
	w.set("ra", p.ra, p.remark)
	w.set("dec", p.dec, "")
	if p.hasMotion {
		w.set("pm_mas_per_yr", "["+strings.Join(p.motion[:], ", ")+"]", "in RA (times cos dec), in Dec")
	}
	if p.epoch.text != "" {
		w.number("position_epoch_mjd", p.epoch, firstMJD, lastMJD, p.epochNote)
	}
	if s := p.sigmaMas; math.Max(s[0], s[1]) > 0 && math.Max(s[0], s[1]) < 1e8 {
		w.set("sigma_position_mas", fmt.Sprintf("[%s, %s]", rounded(s[0], 6).text, rounded(s[1], 6).text), "")
	}
}

func (f *File) writeSpin(w *entry) {
	s := f.source.spin
	if s == nil {
		return
	}
	w.plain("[source.spin]")
	w.number("frequency_hz", s.frequency, 0, 2000, s.note)
	if s.derivative.value != 0 {
		w.number("derivative_hz_per_s", s.derivative, -1e-6, 1e-6, s.derivativeNote)
	}
	w.number("epoch_mjd", s.epoch, firstMJD, lastMJD, cmp.Or(s.epochNote, "TDB"))
	w.sigma("sigma_frequency_hz", s.sigmaFrequency, 100)
	w.sigma("sigma_derivative_hz_per_s", s.sigmaDerivative, 1e-6)
}

func (f *File) writeOrbit(w *entry) {
	b := f.source.orbit
	if b == nil {
		return
	}
	w.plain("[source.orbit]")
	if b.series == nil {
		w.number("period_days", b.period, 0, 1e5, b.periodNote)
	} else {
		var terms []string
		for _, d := range b.series {
			terms = append(terms, d.text)
		}
		w.set("frequency_series", "["+strings.Join(terms, ", ")+"]", "Hz, Hz/s, ...: FB0, FB1, ...")
	}
	note := b.epochNote
	if note == "" {
		note = "TDB"
	}
	w.number("ascending_node_mjd", b.node, firstMJD, lastMJD, note)
	w.number("periastron_mjd", b.periastron, firstMJD, lastMJD, note)
	w.number("semimajor_ls", b.semimajor, 0, 1e5, "")
	if b.eccentricity.value > 0 {
		w.number("eccentricity", b.eccentricity, 0, 1, b.eccentricityNote)
	}
	if b.hasOM {
		w.number("periastron_deg", b.omDeg, -360, 360, "")
	}
	if b.advance.value != 0 {
		w.number("advance_deg_per_yr", b.advance, -1000, 1000, "")
	}
	if b.decay.value != 0 && b.series == nil {
		w.number("decay", b.decay, -1e-7, 1e-7, b.decayNote)
	}
	w.number("companion_msun", b.companion, 0, 100, b.companionNote)
	w.number("sin_i", b.sinI, 0, 1, b.sinINote)
	if b.einstein.value > 0 {
		w.number("einstein_delay_s", b.einstein, 0, 100, "")
	}
	w.sigma("sigma_period_days", b.sigmaPeriod, 100)
	w.sigma("sigma_epoch_days", b.sigmaEpoch, 1000)
	w.sigma("sigma_semimajor_ls", b.sigmaSemimajor, 1e5)
	w.sigma("sigma_decay", b.sigmaDecay, 1e-7)
	w.sigma("sigma_advance_deg_per_yr", b.sigmaAdvance, 1000)
	w.sigma("sigma_einstein_delay_s", b.sigmaEinstein, 100)
	if first, last := f.line("START"), f.line("FINISH"); first != nil && last != nil && first.Value < last.Value {
		w.set("data_mjd", "["+first.exact.text+", "+last.exact.text+"]", "")
	}
}

func (f *File) writeUnknown(w *entry) {
	if len(f.unknown) == 0 {
		return
	}
	w.comment("Lines of %s with keys that are not known:", f.base())
	for _, l := range f.unknown {
		w.comment("    %s", plain(l.written))
	}
}

// An entry is text that grows line by line.
type entry struct{ strings.Builder }

func (w *entry) plain(line string) { w.WriteString(line + "\n") }

func (w *entry) comment(form string, a ...any) { w.plain("# " + plain(fmt.Sprintf(form, a...))) }

// column is where what is said beside a value begins, unless the value is longer.
const column = 34

func (w *entry) set(key, value, note string) {
	line := key + " = " + value
	if note != "" {
		line = fmt.Sprintf("%-*s # %s", column, line, plain(note))
	}
	w.plain(line)
}

// number writes what is given and possible.
func (w *entry) number(key string, d decimal, low, high float64, note string) {
	if d.text != "" && d.value >= low && d.value <= high {
		w.set(key, d.text, note)
	}
}

// sigma writes an error; 0 means that none is known.
func (w *entry) sigma(key string, x, high float64) {
	if x > 0 && x <= high {
		w.set(key, rounded(x, 15).text, "")
	}
}

func lines(n int) string {
	if n == 1 {
		return "1 line"
	}
	return fmt.Sprintf("%d lines", n)
}
