package campaigns

import (
	"fmt"
	"math"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky/timing"
)

// measurement is how well a parameter is known from the logbook.
type measurement struct {
	model     *timing.Model
	parameter timing.Parameter
	sigma     float64 // 0: not determined
	goal      float64 // the error wanted
	hides     string  // why the parameter cannot be told from others yet; empty where it can
}

// debt is how often the error must still be halved, at most mostNeed.
func (m measurement) debt() float64 {
	if m.sigma == 0 {
		return mostNeed
	}
	return math.Min(mostNeed, math.Max(0, math.Log2(m.sigma/m.goal)))
}

func (m measurement) why() string {
	unit := m.parameter.Unit()
	if unit != "" {
		unit = " " + unit
	}
	if m.sigma == 0 {
		return fmt.Sprintf("%s not determined yet, wanted to %.2g%s", m.parameter, m.goal, unit)
	}
	if m.hides != "" {
		return fmt.Sprintf("%s not told apart yet: %.2g%s uncertain, wanted to %.2g%s; %s", m.parameter, m.sigma, unit, m.goal, unit, m.hides)
	}
	return fmt.Sprintf("%s known to %.2g%s, wanted to %.2g%s", m.parameter, m.sigma, unit, m.goal, unit)
}

// measured says how well the logbook knows what an aim wants measured.
func (b *books) measured(k *knowledge, aim *Aim) (measurement, error) {
	return once(b, b.measurements, aim, func() (measurement, error) { return b.measure(k, aim) })
}

func (b *books) measure(k *knowledge, aim *Aim) (measurement, error) {
	src := k.source.timingSource()
	model, err := timing.New(src, timing.LoosePriors(src, k.ephemerisPriors()), b.arrivals(k))
	if err != nil {
		return measurement{}, fmt.Errorf("%s: %w", k.source.Name, err)
	}
	p, value, err := k.wanted(aim, model)
	if err != nil {
		return measurement{}, fmt.Errorf("%s: %w", k.source.Name, err)
	}
	m := measurement{model: model, parameter: p, goal: math.Abs(value) * aim.GoalPercent / 100}
	if sigma, err := model.SigmaOf(p); err == nil {
		m.sigma = sigma
	}
	if p == timing.EinsteinDelay && m.sigma > math.Abs(value) {
		m.hides = k.source.Orbit.hidesEinstein()
	}
	return m, nil
}

// hidesEinstein says what an Einstein delay that is less than its error waits for: γ sin E is a part of the orbit's size and
// orientation until periastron has turned.
func (o *Orbit) hidesEinstein() string {
	if o.AdvanceDegPerYr == 0 {
		return "without advance_deg_per_yr it passes for semimajor axis and longitude of periastron"
	}
	return "until periastron has turned further it passes for semimajor axis and longitude of periastron"
}

// wanted is the parameter that an aim is about, and the value that its goal is a share of. Of a position it is the
// coordinate that is known worse, and the goal is a share of the error that the ephemeris gives: a share of an angle
// on the sky means nothing.
func (k *knowledge) wanted(aim *Aim, model *timing.Model) (timing.Parameter, float64, error) {
	switch aim.Parameter {
	case "spin frequency derivative":
		return timing.FrequencyDerivative, model.Value(timing.FrequencyDerivative), nil
	case "position":
		ra, errRA := model.SigmaOf(timing.RightAscension)
		dec, errDec := model.SigmaOf(timing.Declination)
		stated := k.source.SigmaPositionMas
		if errRA == nil && errDec == nil && ra > dec {
			return timing.RightAscension, stated[0], nil
		}
		return timing.Declination, stated[1], nil
	}
	p, err := timing.ParameterNamed(aim.Parameter)
	if err != nil {
		return 0, 0, err
	}
	return p, model.Value(p), nil
}

// measure adds a term for what the session's minutes add to the knowledge of a parameter. It is worth 1 times
// priority and need where a visit of the wanted minutes would add as much as at the best moment there is.
func (jb *jobBuilder) measure(aim *Aim) error {
	m, err := jb.books.measured(jb.source.knowledge, aim)
	if err != nil {
		return err
	}
	jb.owes(aim, m.debt())
	minutes, ok := jb.wantedMinutes(aim)
	if !ok {
		return nil
	}
	need := math.Min(1, m.debt())
	wanted, least := jb.visit(aim, minutes)
	v, err := jb.visits(m, minutes)
	if err != nil || gain(v.best) < leastGain {
		jb.term(aim, sched.Term{
			Scale: jb.scale(need), Curve: sched.Root, Wanted: wanted, Least: least, Cum: jb.effective(), Why: m.why(),
		})
		return nil
	}
	t := v.rooted(need, jb.scale)
	if jb.source.src.Priority*need/gain(v.best) < mostScale && v.logIsCloser() {
		t = v.logged(need, jb.scale)
	}
	t.Why = m.why()
	jb.term(aim, t)
	return nil
}

// leastGain is what a visit at the best moment must add for its moment to matter. Where it adds less, everything that
// the parameter hangs on is still unknown, and any visit helps.
const leastGain = 1e-6

// mostScale is the largest scale of a term, in units of worth, that is still far from what a plan can add up.
const mostScale = 1e5

// bestSamples is how many moments are tried for the best one.
const bestSamples = 96

// visits are what visits of a wanted length in a session add to the knowledge of a parameter.
//
// A visit is one arrival time whose error is that of all its minutes together: ½ ln(1+q) is then exactly what it adds.
// The minutes of a visit lie close together, each says nearly what the one before it said, and what they cannot tell
// apart they cannot improve by their number: adding up what each minute adds alone would promise several times as
// much. So a minute is given its share of the visit around it, and how a visit grows beyond its wanted length, or
// falls short of it, is left to the curve that comes closest.
type visits struct {
	measurement
	minutes float64              // wanted, effective
	length  []timing.Observation // each minute of the session, for itself
	q       []float64            // of a visit around each minute
	best    float64              // q of one at the best moment of the orbit, or of a year, or of the session
	finest  int                  // the minute with the largest q
}

func (jb *jobBuilder) visits(m measurement, wanted float64) (*visits, error) {
	ps, p := jb.source, jb.prepared
	zenith := ps.setups[jb.receiver].TOAErrorUs(1, 90)
	v := &visits{measurement: m, minutes: wanted, length: make([]timing.Observation, p.Problem.Minutes)}
	whole := make([]timing.Observation, p.Problem.Minutes)
	for i := range v.length {
		o := timing.Observation{MJD: ps.knowledge.clock.barycentreMJD(p.Instant(i)), SigmaUs: math.Inf(1)}
		whole[i] = o
		if w := ps.weights[jb.receiver][i]; w > 0 && !jb.untimable(i) {
			o.SigmaUs = zenith / math.Sqrt(w)
			whole[i].SigmaUs = o.SigmaUs / math.Sqrt(wanted)
		}
		v.length[i] = o
	}
	span := 365.25
	if ps.src.Orbit != nil {
		span = ps.src.Orbit.PeriodDays
	}
	tries := make([]timing.Observation, bestSamples)
	for i := range tries {
		tries[i] = timing.Observation{MJD: v.length[0].MJD + span*float64(i)/bestSamples, SigmaUs: zenith / math.Sqrt(wanted)}
	}
	var err error
	if v.q, err = m.model.GainPerMinute(m.parameter, whole, nil); err != nil {
		return nil, err
	}
	over, err := m.model.GainPerMinute(m.parameter, tries, nil)
	if err != nil {
		return nil, err
	}
	for _, q := range over {
		v.best = math.Max(v.best, q)
	}
	for i, q := range v.q {
		v.best = math.Max(v.best, q)
		if q > v.q[v.finest] {
			v.finest = i
		}
	}
	return v, nil
}

// gain is what a visit of a given q adds: by how much ln σ shrinks.
func gain(q float64) float64 { return 0.5 * math.Log1p(q) }

// share is what a minute has of a visit around it, as the root curve counts: 1 for the best visit's minutes together.
func (v *visits) share(minute int) float64 {
	g := gain(v.q[minute]) / gain(v.best)
	return g * g / v.minutes
}

// rooted is the term by the curve √x: it takes the minutes of a visit to say much the same.
func (v *visits) rooted(need float64, scale func(float64) sched.Micro) sched.Term {
	const unit = 1e6
	return sched.Term{Scale: scale(need), Curve: sched.Root, Wanted: unit, Cum: v.gather(unit, v.share)}
}

// logged is the term by the curve ½ ln(1+x): it takes each minute of a visit to say something new.
func (v *visits) logged(need float64, scale func(float64) sched.Micro) sched.Term {
	total := 0.0
	for _, q := range v.q {
		total += q / v.minutes
	}
	unit := math.Min(1e9, 1e9/math.Max(total, 1e-9)) // gathered units to an x of 1
	return sched.Term{
		Scale: scale(need / gain(v.best)), Curve: sched.Log, Wanted: int32(unit),
		Cum: v.gather(unit, func(m int) float64 { return v.q[m] / v.minutes }),
	}
}

func (v *visits) gather(unit float64, of func(minute int) float64) []int32 {
	cum := make([]int32, len(v.q)+1)
	sum := 0.0
	for m := range v.q {
		sum += of(m) * unit
		cum[m+1] = int32(math.Min(sum, math.MaxInt32/2))
	}
	return cum
}

// logIsCloser compares both curves with what slots around the best minute truly add: shorter ones, as long as wanted,
// and twice as long.
func (v *visits) logIsCloser() bool {
	var rootOff, logOff float64
	for _, times := range []float64{0.6, 1, 2} {
		half := int(math.Ceil(v.minutes * times / 2))
		from, to := max(0, v.finest-half), min(len(v.q), v.finest+half)
		exact, err := v.model.SlotGain(v.parameter, v.length[from:to])
		if err != nil || !(exact > 0) {
			continue
		}
		x, y := 0.0, 0.0
		for m := from; m < to; m++ {
			x += v.share(m)
			y += v.q[m] / v.minutes
		}
		rootOff += math.Abs(math.Log(rootCredit(x) * gain(v.best) / exact))
		logOff += math.Abs(math.Log(gain(y) / exact))
	}
	return logOff < rootOff
}

// rootCredit is the credit of the curve √x: beyond 1 a quarter of the slope that it has there.
func rootCredit(x float64) float64 {
	if x <= 1 {
		return math.Sqrt(x)
	}
	return 1 + (x-1)/8
}
