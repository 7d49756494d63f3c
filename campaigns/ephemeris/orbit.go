package ephemeris

import (
	"fmt"
	"math"
	"slices"

	"example.org/tallystick/sky/orbit"
	"example.org/tallystick/sky/timing"
)

// pulsarMsun is what a pulsar is taken to weigh where its companion's mass is derived.
const pulsarMsun = 1.4

// A binary is the orbit of an entry.
type binary struct {
	period, node, periastron, semimajor decimal // one of node and periastron is empty
	periodNote, epochNote               string
	eccentricity, omDeg                 decimal
	eccentricityNote                    string
	hasOM                               bool
	advance, decay                      decimal
	decayNote                           string
	series                              []decimal // orbital frequency and derivatives: instead of period and decay
	sigmaPeriod, sigmaEpoch             float64
	sigmaDecay, sigmaAdvance            float64
	sigmaSemimajor                      float64
	einstein                            decimal
	sigmaEinstein                       float64
	companion, sinI                     decimal
	companionNote, sinINote             string
}

// orbitKeys tell a binary.
var orbitKeys = []string{"BINARY", "PB", "FB0", "A1", "T0", "TASC"}

// orbit reads the orbit. One that is not whole, or impossible, is left out, and that is said.
func (f *File) orbit(scale timeScale) {
	if !slices.ContainsFunc(orbitKeys, func(key string) bool { return f.line(key) != nil }) {
		return
	}
	b := &binary{}
	for _, read := range []func(*binary, timeScale) error{f.orbitPeriod, f.orbitEpoch, f.orbitSize, f.orbitShape} {
		if err := read(b, scale); err != nil {
			f.refuseOrbit(err)
			return
		}
	}
	if l := f.line("OMDOT"); l != nil {
		b.advance, b.sigmaAdvance = l.exact, l.Sigma
	}
	o, err := orbit.New(orbit.Elements{
		PeriodDays: b.period.value, AscendingNodeMJD: b.node.value, PeriastronMJD: b.periastron.value,
		SemimajorLs: b.semimajor.value, Eccentricity: b.eccentricity.value, PeriastronDeg: b.omDeg.value,
		AdvanceDegPerYr: b.advance.value, Decay: b.decay.value,
	})
	if err != nil {
		f.refuseOrbit(err)
		return
	}
	f.einstein(b, o, scale)
	f.companion(b, o)
	f.source.orbit = b
}

// einstein reads the amplitude of the Einstein delay, which only an eccentric orbit has.
func (f *File) einstein(b *binary, o orbit.Orbit, scale timeScale) {
	l := f.line("GAMMA")
	if l == nil || l.Value == 0 && l.Sigma == 0 {
		return
	}
	most := orbit.LargestEinsteinSec(o.PeriodDays, o.Eccentricity)
	switch {
	case o.Eccentricity == 0:
		f.drop("GAMMA", "a circular orbit has no Einstein delay")
	case l.Value > most:
		f.drop("GAMMA", "more than the %.3g s that a companion of 100 Msun makes in this orbit", most)
	default:
		b.einstein, b.sigmaEinstein = scale.length(l.exact, 1), l.Sigma
	}
}

func (f *File) refuseOrbit(err error) {
	f.remark(0, "a binary without an orbit that can be used: %v; the entry has no orbit", err)
	f.source.orbitFault = err.Error()
}

func (f *File) orbitPeriod(b *binary, scale timeScale) error {
	pb, fb := f.line("PB"), f.line("FB0")
	switch {
	case pb != nil:
		b.period, b.sigmaPeriod = scale.length(pb.exact, 1), pb.Sigma
		if fb != nil && math.Abs(pb.Value*fb.Value*secPerDay-1) > 1e-6 {
			f.remark(fb.Number, "contradiction: FB0 %s is not 1/PB, PB being %s in line %d; PB is taken", fb.Text, pb.Text, pb.Number)
		}
		f.noSeries("PB stands beside it")
	case fb != nil:
		frequency := scale.length(fb.exact, -1)
		b.period = periodDays(frequency)
		b.sigmaPeriod = fb.Sigma / (fb.Value * fb.Value) / secPerDay
		b.periodNote = "1/FB0, FB0 " + fb.Text + " Hz"
		f.seriesDecay(b, scale)
	default:
		return fmt.Errorf("found neither PB nor FB0")
	}
	if l := f.line("PBDOT"); l != nil {
		if b.decay.value != 0 && math.Abs(b.decay.value-l.Value) > 0.01*math.Abs(l.Value) {
			f.remark(l.Number, "contradiction: PBDOT %s is not what FB0 and FB1 make, %.4g; PBDOT is taken", l.Text, b.decay.value)
		}
		b.decay, b.decayNote, b.sigmaDecay = l.exact, "", l.Sigma
		f.noSeries("PBDOT stands beside it")
		b.series = nil
	}
	return nil
}

// seriesDecay turns the second term of an orbital frequency to a decay. With further terms the series is kept as it is.
func (f *File) seriesDecay(b *binary, scale timeScale) {
	l := f.line("FB1")
	if l != nil {
		decay := orbit.DecayFromSeries(f.line("FB0").Value, l.Value)
		if math.Abs(decay) > 1e-7 {
			f.drop("FB1", "it makes a decay of %.3g, and 1e-7 is the most that is accepted", decay)
		} else if decay != 0 {
			b.decay, b.decayNote = rounded(decay, 12), "-FB1/FB0^2"
			f0 := f.line("FB0").Value
			b.sigmaDecay = l.Sigma / (f0 * f0)
		}
	}
	for n := 0; ; n++ {
		term := f.line(fmt.Sprintf("FB%d", n))
		if term == nil {
			break
		}
		b.series = append(b.series, scale.length(term.exact, -n-1))
	}
	if len(b.series) < 3 {
		b.series = nil
		f.noSeries("the terms before it are not all there")
		return
	}
	f.remark(f.line("FB2").Number, "the orbital frequency has %d terms: good within its data only, far from them it means nothing", len(b.series))
}

// noSeries says of the higher terms of an orbital frequency why they are left out.
func (f *File) noSeries(why string) {
	for n := 2; n < 20; n++ {
		if key := fmt.Sprintf("FB%d", n); f.line(key) != nil {
			f.drop(key, "%s; far from the epoch conjunctions may come at other times than predicted", why)
		}
	}
}

// orbitEpoch takes the node where the near-circular form is used, else periastron.
func (f *File) orbitEpoch(b *binary, scale timeScale) error {
	node, periastron := f.line("TASC"), f.line("T0")
	if node != nil && periastron != nil {
		taken := "TASC"
		if f.line("EPS1") == nil && f.line("EPS2") == nil && f.line("OM") != nil {
			taken, node = "T0", nil
		}
		f.remark(periastron.Number, "contradiction: both T0 and TASC; %s is taken, which belongs to the other elements", taken)
	}
	switch {
	case node != nil:
		b.node, b.sigmaEpoch = scale.epoch(node.exact), node.Sigma
	case periastron == nil:
		return fmt.Errorf("found neither T0 nor TASC")
	case f.line("OM") == nil && !f.eccentric():
		b.node, b.sigmaEpoch = scale.epoch(periastron.exact), periastron.Sigma
		b.epochNote = "T0: in a circular orbit without OM it is the node"
	default:
		b.periastron, b.sigmaEpoch = scale.epoch(periastron.exact), periastron.Sigma
	}
	return nil
}

// eccentric says that some element makes the orbit more than a circle.
func (f *File) eccentric() bool {
	return slices.ContainsFunc([]string{"ECC", "EPS1", "EPS2"}, func(key string) bool {
		l := f.line(key)
		return l != nil && l.Value != 0
	})
}

func (f *File) orbitSize(b *binary, scale timeScale) error {
	l := f.line("A1")
	if l == nil {
		return fmt.Errorf("found no A1")
	}
	b.semimajor, b.sigmaSemimajor = scale.length(l.exact, 1), l.Sigma
	return nil
}

// orbitShape reads eccentricity and longitude of periastron, from ECC and OM or from
//
//	EPS1 = e sin ω,  EPS2 = e cos ω
//
// Source:  Lange et al. 2001, MNRAS 326, 274
// Checked: TestNearCircular
func (f *File) orbitShape(b *binary, _ timeScale) error {
	ecc, om, eps1, eps2 := f.line("ECC"), f.line("OM"), f.line("EPS1"), f.line("EPS2")
	if eps1 != nil || eps2 != nil {
		var e1, e2 float64
		if eps1 != nil {
			e1 = eps1.Value
		}
		if eps2 != nil {
			e2 = eps2.Value
		}
		e := math.Hypot(e1, e2)
		if ecc == nil {
			if e >= 1 {
				return fmt.Errorf("EPS1 and EPS2 make an eccentricity of %.4g; accepted: below 1", e)
			}
			b.eccentricity, b.omDeg, b.hasOM = rounded(e, 15), rounded(math.Mod(math.Atan2(e1, e2)*degPerRad+360, 360), 15), e > 0
			b.eccentricityNote = "from EPS1 and EPS2"
			return nil
		}
		if math.Abs(e-ecc.Value) > 1e-6+0.01*ecc.Value {
			f.remark(ecc.Number, "contradiction: ECC is %s, and EPS1 and EPS2 make %.6g; ECC is taken", ecc.Text, e)
		}
	}
	if ecc != nil {
		b.eccentricity = ecc.exact
	}
	if om != nil {
		b.omDeg, b.hasOM = om.exact, true
	}
	if om == nil && ecc != nil && ecc.Value > 0 {
		return fmt.Errorf("an eccentricity of %s without OM: where periastron lies is not known", ecc.Text)
	}
	return nil
}

// companion reads inclination and companion mass; a mass that is not given is derived from the orbit's size.
func (f *File) companion(b *binary, o orbit.Orbit) {
	f.inclination(b)
	function := orbit.MassFunctionMsun(o.SemimajorLs, o.PeriodDays)
	if l := f.line("M2"); l != nil {
		b.companion = l.exact
		if b.sinI.value > 0 {
			if pulsar := orbit.PulsarMsun(function, l.Value, b.sinI.value); pulsar <= 0 {
				f.remark(l.Number, "contradiction: M2 %s and the inclination leave the pulsar a mass of %.3g Msun in this orbit", l.Text, pulsar)
			}
		}
		return
	}
	if stig, h3 := f.orthometric(), f.line("H3"); stig > 0 && h3 != nil {
		if m := timing.CompanionFromH3(h3.Value, stig); m > 0 && m <= 100 {
			b.companion, b.companionNote = rounded(m, 6), "derived companion mass: H3/STIG^3, Freire & Wex 2010"
			f.remark(0, "no M2: the companion mass, %s Msun, is derived from the Shapiro delay's H3", b.companion.text)
			return
		}
	}
	f.massFromSize(b, function)
}

func (f *File) massFromSize(b *binary, function float64) {
	sinI, how, kind := 1.0, "i = 90 deg", "minimum companion mass"
	if b.sinI.value > 0 {
		sinI, how, kind = b.sinI.value, "sin i as given", "derived companion mass"
	}
	m := orbit.CompanionMsun(function, pulsarMsun, sinI)
	if !(m > 0 && m <= 100) {
		f.remark(0, "no companion mass: the mass function makes %.3g Msun, which is none", m)
		return
	}
	b.companion = rounded(m, 4)
	b.companionNote = fmt.Sprintf("%s: from the mass function, pulsar of %g Msun, %s", kind, pulsarMsun, how)
	f.remark(0, "no M2: %s Msun is the %s (mass function, pulsar of %g Msun, %s)", b.companion.text, kind, pulsarMsun, how)
}

// orthometric is the ratio STIG, or H4/H3 where only the amplitudes are given; 0 without.
//
// Source:  Freire & Wex 2010, MNRAS 409, 199
// Checked: TestOrthometric
func (f *File) orthometric() float64 {
	if l := f.line("STIG"); l != nil {
		return l.Value
	}
	if h3, h4 := f.line("H3"), f.line("H4"); h3 != nil && h4 != nil && h4.Value <= h3.Value {
		return h4.Value / h3.Value
	}
	return 0
}

// inclination reads the sine of the inclination in any of its forms.
//
//	SINI;  sin KIN;  1 − exp(−SHAPMAX);  2 ς/(1+ς²)
func (f *File) inclination(b *binary) {
	set := func(s float64, note string) {
		if s > 0 && s <= 1 {
			b.sinI, b.sinINote = rounded(s, 15), note
		}
	}
	sini, kin, shapmax, stig := f.line("SINI"), f.line("KIN"), f.line("SHAPMAX"), f.orthometric()
	switch {
	case sini != nil && !sini.isText():
		b.sinI = sini.exact
		if kin != nil && math.Abs(math.Sin(kin.Value/degPerRad)-sini.Value) > 0.01 {
			f.remark(kin.Number, "contradiction: KIN %s deg has a sine of %.6g, and SINI is %s; SINI is taken", kin.Text, math.Sin(kin.Value/degPerRad), sini.Text)
		}
	case kin != nil:
		set(math.Sin(kin.Value/degPerRad), "sine of KIN, "+kin.Text+" deg")
	case sini != nil:
		f.remark(sini.Number, "SINI KIN without KIN: the inclination is not known")
	case shapmax != nil:
		set(-math.Expm1(-shapmax.Value), "from SHAPMAX "+shapmax.Text)
	case stig > 0:
		set(timing.SinIFromStig(stig), "from STIG or H4/H3, Freire & Wex 2010")
	}
}
