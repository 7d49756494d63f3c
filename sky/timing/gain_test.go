package timing

import (
	"math"
	"sync"
	"testing"

	"pgregory.net/rapid"
)

// One candidate gains exactly what fitting again with it says, and a slot about the sum.
func TestGainIsWhatRefittingGives(t *testing.T) {
	src := example()
	m := mustModel(t, src, LoosePriors(src, nil), weekly(56000, 3))
	rapid.Check(t, func(t *rapid.T) {
		o := Observation{rapid.Float64Range(55500, 58500).Draw(t, "mjd"), math.Pow(10, rapid.Float64Range(-1, 3).Draw(t, "log sigma")), 1400}
		p := rapid.SampledFrom([]Parameter{CompanionMass, SinI, OrbitalDecay, Parallax, Frequency, ProperMotion, AdvanceOfPeriastron}).Draw(t, "parameter")
		q, err := m.GainPerMinute(p, []Observation{o}, nil)
		if err != nil {
			t.Fatal(err)
		}
		want, err := m.SlotGain(p, []Observation{o})
		if err != nil {
			t.Fatal(err)
		}
		if got := 0.5 * math.Log1p(q[0]); math.Abs(got-want) > 1e-6+1e-5*want {
			t.Fatalf("%v: %g, fitting again %g", p, got, want)
		}
	})
}

// What matters is found without being told: conjunction for the mass, span for the decay.
func TestGainFindsWhatMatters(t *testing.T) {
	src := circular()
	src.SinI = 0.999
	m := mustModel(t, src, LoosePriors(src, nil), weekly(56000, 3))
	var minutes []Observation
	for i := range 3 * 1440 {
		minutes = append(minutes, Observation{57200 + float64(i)/1440, 3, 1400})
	}
	q, err := m.GainPerMinute(CompanionMass, minutes, nil)
	if err != nil {
		t.Fatal(err)
	}
	best := 0
	for i := range q {
		if q[i] > q[best] {
			best = i
		}
	}
	at := minutes[best].MJD
	if phase := m.geo.orb.Phase(at); math.Abs(phase-0.25) > 0.01 {
		t.Errorf("the best minute for the companion's mass is at phase %g", phase)
	}
	late := minutes[100]
	late.MJD += 5 * daysPerYear
	// The same orbital phase five years on: whole orbits later.
	late.MJD = minutes[100].MJD + math.Round(5*daysPerYear/src.Orbit.PeriodDays)*src.Orbit.PeriodDays
	q, err = m.GainPerMinute(OrbitalDecay, []Observation{minutes[100], late}, nil)
	if err != nil {
		t.Fatal(err)
	}
	if q[1] < 20*q[0] {
		t.Errorf("a minute five years on gains %g for the decay, now %g", q[1], q[0])
	}
}

func TestGainOfNothing(t *testing.T) {
	src := example()
	m := mustModel(t, src, []Prior{{Phase, 0.01}}, weekly(57000, 1))
	dst := make([]float64, 0, 4)
	q, err := m.GainPerMinute(Phase, []Observation{{57400, 0, 1400}, {57400, math.Inf(1), 1400}, {57400, 1, 1400}}, dst)
	if err != nil || len(q) != 3 || q[0] != 0 || q[1] != 0 || !(q[2] > 0) {
		t.Errorf("got %v, %v", q, err)
	}
	// What is held is known: nothing to gain.
	q, err = m.GainPerMinute(CompanionMass, []Observation{{57400, 1, 1400}}, q)
	if err != nil || q[0] != 0 {
		t.Errorf("a held parameter gains %v, %v", q, err)
	}
	if n := testing.AllocsPerRun(10, func() { q, _ = m.GainPerMinute(Phase, []Observation{{57400, 1, 1400}}, q) }); n != 0 {
		t.Errorf("%g allocations in a gain table", n)
	}
}

// A source of a campaign: twenty years of weekly arrivals, and a table over twelve hours of minutes.
func BenchmarkInformation(b *testing.B) {
	src, obs := example(), weekly(50000, 20)
	priors := LoosePriors(src, nil)
	obs = obs[:len(obs)/2] // one arrival a week
	for b.Loop() {
		if _, err := New(src, priors, obs); err != nil {
			b.Fatal(err)
		}
	}
}

// A whole campaign on two cores: 120 sources, information and gain table.
func BenchmarkCampaign(b *testing.B) {
	src, obs := example(), weekly(50000, 20)
	priors := LoosePriors(src, nil)
	obs = obs[:len(obs)/2]
	minutes := make([]Observation, 720)
	for i := range minutes {
		minutes[i] = Observation{57400 + float64(i)/1440, 3, 1400}
	}
	for b.Loop() {
		var both sync.WaitGroup
		for range 2 {
			both.Go(func() {
				var q []float64
				for range 60 {
					m, err := New(src, priors, obs)
					if err == nil {
						q, err = m.GainPerMinute(CompanionMass, minutes, q)
					}
					if err != nil {
						b.Error(err)
					}
				}
			})
		}
		both.Wait()
	}
}

func BenchmarkGain(b *testing.B) {
	src := example()
	m := mustModel(b, src, LoosePriors(src, nil), weekly(50000, 20))
	minutes := make([]Observation, 720)
	for i := range minutes {
		minutes[i] = Observation{57400 + float64(i)/1440, 3, 1400}
	}
	var q []float64
	for b.Loop() {
		var err error
		if q, err = m.GainPerMinute(CompanionMass, minutes, q); err != nil {
			b.Fatal(err)
		}
	}
}
