package campaigns

import (
	"fmt"
	"math"
	"strings"

	"example.org/tallystick/sched"
)

// sharesPerMinute is the unit in which a term gathers: hundredths of an effective minute.
const sharesPerMinute = 100

// jobBuilder turns the aims of one source into the jobs of a session.
type jobBuilder struct {
	prepared *Prepared
	books    *books
	source   *preparedSource
	receiver int // index into Problem.Receivers
	job      *sched.Job
}

// jobs returns a job for each receiver of the session that an aim of the source asks for.
func (p *Prepared) jobs(b *books, source *preparedSource, t siteTrack, bars map[string]bool) ([]sched.Job, error) {
	var out []sched.Job
	for r, rec := range p.Problem.Receivers {
		job := sched.Job{
			Source: source.src.Name, Receiver: r, Priority: source.src.Priority,
			MaxSlots: 1, Barred: bars[source.src.Name], Facts: p.facts(source, r, t),
		}
		jb := jobBuilder{prepared: p, books: b, source: source, receiver: r, job: &job}
		asked := false
		for i := range source.src.Aims {
			aim := &source.src.Aims[i]
			if aim.wants(rec.Name) {
				asked = true
				if err := jb.add(aim); err != nil {
					return nil, err
				}
			}
		}
		if asked {
			jb.bound()
			out = append(out, job)
		}
	}
	return out, nil
}

func (a *Aim) wants(receiver string) bool {
	for _, r := range a.Receivers {
		if r == receiver {
			return true
		}
	}
	return false
}

// label names an aim in a few words.
func (a *Aim) label() string {
	with := strings.Join(a.Receivers, "+")
	switch a.Kind {
	case Cadence:
		return fmt.Sprintf("every %s with %s", days(a.EveryDays), with)
	case PhaseCoverage:
		return fmt.Sprintf("phase coverage, %d bins", a.Bins)
	case Conjunction:
		return fmt.Sprintf("superior conjunction ±%.3g turns", a.HalfWidthTurns)
	case Measure:
		return fmt.Sprintf("measure %s to %.3g %%", a.Parameter, a.GoalPercent)
	case Connect:
		return fmt.Sprintf("keep the count within %.3g turns", a.MaxPhaseErrorTurns)
	case Calibration:
		return "calibration with " + with
	}
	return string(a.Kind)
}

func days(d float64) string { return fmt.Sprintf("%.3g d", d) }

func (jb *jobBuilder) add(aim *Aim) error {
	switch aim.Kind {
	case Cadence:
		jb.cadence(aim)
	case PhaseCoverage:
		jb.phaseCoverage(aim)
	case Conjunction:
		return jb.conjunction(aim)
	case Measure:
		return jb.measure(aim)
	case Connect:
		return jb.connect(aim)
	case Calibration:
		jb.calibration(aim)
	}
	return nil
}

// bound gives the job the shortest and longest slot that any of its aims has a use for.
func (jb *jobBuilder) bound() {
	j, n := jb.job, jb.prepared.Problem.Minutes
	if j.MinMin < 1 {
		j.MinMin = 1
	}
	j.MaxMin = min(max(j.MaxMin, j.MinMin), max(n, 1))
	j.MinMin = min(j.MinMin, j.MaxMin)
}

// stretch widens the job's bounds so that slots from the least to the most minutes are allowed.
func (jb *jobBuilder) stretch(least, most float64) {
	j := jb.job
	lo, hi := max(1, int(math.Ceil(least-1e-9))), max(1, int(math.Ceil(most-1e-9)))
	if j.MinMin == 0 || lo < j.MinMin {
		j.MinMin = lo
	}
	j.MaxMin = max(j.MaxMin, hi)
}

// term appends a term of worth, unless there is nothing to be had from it.
func (jb *jobBuilder) term(aim *Aim, t sched.Term) {
	if t.Scale <= 0 || t.Wanted <= 0 || t.Cum == nil || t.Cum[len(t.Cum)-1] == t.Cum[0] {
		return
	}
	t.Kind = sched.TermKind(aim.Kind)
	if t.Label == "" {
		t.Label = aim.label()
	}
	jb.job.Terms = append(jb.job.Terms, t)
}

// owes notes what an aim is owed; the greatest debt is what a source that is not due is told by.
func (jb *jobBuilder) owes(aim *Aim, debt float64) {
	f := &jb.job.Facts
	if f.DebtAim == "" || debt > f.Debt {
		f.Debt, f.DebtAim = debt, aim.label()
	}
}

// scale is priority times need, as worth.
func (jb *jobBuilder) scale(need float64) sched.Micro {
	return sched.Micro(math.Round(jb.source.src.Priority * need * float64(sched.Unit)))
}

// effective is what each minute of the session gathers with this receiver: hundredths of an effective
// minute, from minute 0 to each minute.
func (jb *jobBuilder) effective() []int32 { return jb.source.effective[jb.receiver] }

// wantedMinutes is what an aim wants of one visit with this receiver, in effective minutes: as it
// says, or from the radiometer equation. ok is false where no amount of time reaches it.
func (jb *jobBuilder) wantedMinutes(aim *Aim) (minutes float64, ok bool) {
	if aim.ToaUs > 0 {
		return jb.source.minutesFor(jb.receiver, aim.ToaUs)
	}
	return aim.Minutes, true
}

// chance says how many visits reach the wanted TOA error, where scintillation decides; empty elsewhere.
func (jb *jobBuilder) chance(aim *Aim) string {
	src := jb.source.src
	if aim.ToaUs == 0 || src.Scintillation == nil {
		return ""
	}
	rec := jb.prepared.Problem.Receivers[jb.receiver].Name
	r := reachWith(src, jb.prepared.Campaign.receiver(rec, jb.prepared.Site.Name), aim.ToaUs)
	return "; " + r.chanceWords(aim.ToaUs)
}

// visit stretches the job for an aim of so many wanted minutes and returns the aim's Wanted and Least.
func (jb *jobBuilder) visit(aim *Aim, minutes float64) (wanted, least int32) {
	most := aim.MaxMinutes
	if most == 0 {
		most = 2 * minutes
	}
	// Where the gain is better than at the zenith, a shorter slot brings the least that is of use.
	jb.stretch(aim.MinFraction*minutes/jb.source.heaviest[jb.receiver], most)
	return shares(minutes), shares(aim.MinFraction * minutes)
}

func shares(minutes float64) int32 {
	return int32(min(math.Round(minutes*sharesPerMinute), math.MaxInt32/4))
}

// cadence adds a term for what the aim is owed. A slot with any of its receivers is an observation and is worth the
// whole need: two receivers take two slots, and halving their worth would leave every pair behind the sources that
// need one.
func (jb *jobBuilder) cadence(aim *Aim) {
	account := jb.books.cadence(jb.source.src, aim)
	minutes, ok := jb.wantedMinutes(aim)
	if !ok {
		jb.owes(aim, account.Debt)
		return
	}
	wanted, least := jb.visit(aim, minutes)
	receiver := jb.prepared.Problem.Receivers[jb.receiver].Name
	for _, need := range account.needs {
		if need.Receiver == receiver {
			jb.owes(aim, need.Debt)
			jb.term(aim, sched.Term{
				Scale: jb.scale(need.Need), Curve: sched.Root,
				Wanted: wanted, Least: least, Cum: jb.effective(), Why: need.Why + jb.chance(aim),
			})
		}
	}
}

func (jb *jobBuilder) calibration(aim *Aim) {
	jb.job.Must = true
	jb.job.MaxSlots = max(jb.job.MaxSlots, aim.PerSession)
	jb.stretch(aim.Minutes, aim.Minutes)
	jb.term(aim, sched.Term{
		Scale: jb.scale(1), Curve: sched.Step, Wanted: shares(aim.Minutes), Cum: plainMinutes(jb.prepared.Problem.Minutes),
		Why: "every session needs it",
	})
}

// plainMinutes gathers minutes as they pass.
func plainMinutes(minutes int) []int32 {
	cum := make([]int32, minutes+1)
	for i := range cum {
		cum[i] = int32(i * sharesPerMinute)
	}
	return cum
}
