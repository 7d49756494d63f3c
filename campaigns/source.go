package campaigns

import (
	"fmt"
	"math"
	"time"

	"example.org/tallystick/sched"
	"example.org/tallystick/sky"
	"example.org/tallystick/sky/radiometer"
)

// A preparedSource is a source during a session.
type preparedSource struct {
	src       *Source
	knowledge *knowledge
	place     sky.Place
	setups    []radiometer.Setup // by index in Problem.Receivers
	effective [][]int32          // by receiver: hundredths of an effective minute from the start to each minute
	weights   [][]float64        // by receiver: what each minute counts for, 1 at the zenith
	heaviest  []float64          // by receiver: the most that a minute counts for, at least 1
	eclipses  []eclipsed         // by receiver
}

// hide works out what each receiver of the session loses to eclipses.
func (ps *preparedSource) hide(p *Prepared) {
	for _, rec := range p.Problem.Receivers {
		ps.eclipses = append(ps.eclipses, ps.knowledge.eclipses(p.Campaign.receiver(rec.Name, p.Site.Name), p.Problem.Start, p.Problem.Minutes))
	}
}

// narrowestEclipse is the one that hides the source with every receiver: they have one centre.
func (ps *preparedSource) narrowestEclipse() *eclipsed {
	narrow := &ps.eclipses[0]
	for i := range ps.eclipses {
		if ps.eclipses[i].halfWidthTurns < narrow.halfWidthTurns {
			narrow = &ps.eclipses[i]
		}
	}
	return narrow
}

// clear is what a receiver's own eclipses leave of windows.
func (ps *preparedSource) clear(windows []sched.Window, receiver int) []sched.Window {
	e := &ps.eclipses[receiver]
	return without(windows, e.hidden, e.reason())
}

// lookAt is where the source stands at a minute.
func (p *Prepared) lookAt(ps *preparedSource, minute int) sky.Look {
	return p.site.Look(p.frame, ps.place, p.Instant(minute))
}

// mountAzimuth is where the mount's first axis stands on a node at a minute: its azimuth within the
// cable's travel. An equatorial or transit mount has no cable wrap, and the compass azimuth is given.
func (p *Prepared) mountAzimuth(n sched.Node, minute int) float64 {
	pl := &p.places[n.Place]
	if p.Site.Mount != AltAz {
		return p.Tracks[pl.source].AzDeg[minute]
	}
	return pl.axes[minute].A
}

// icrsAt is the source's ICRS position with its proper motion up to t, in degrees.
func (ps *preparedSource) icrsAt(t time.Time) (ra, dec float64) {
	years := (sky.MJD(t) - ps.src.PositionMJD) / 365.25
	const degPerMas = 1.0 / 3.6e6
	dec = ps.src.DecDeg + years*ps.src.PMMasPerYr[1]*degPerMas
	ra = ps.src.RADeg + years*ps.src.PMMasPerYr[0]*degPerMas/math.Max(1e-9, math.Cos(ps.src.DecDeg*math.Pi/180))
	return math.Mod(ra+360, 360), dec
}

// listen works out what each receiver of the session hears of the source.
func (ps *preparedSource) listen(p *Prepared) {
	el := p.Tracks[p.sourceByName[ps.src.Name]].ElDeg
	for _, rec := range p.Problem.Receivers {
		set := ps.src.setup(p.Campaign.receiver(rec.Name, p.Site.Name))
		weights := set.EffectiveWeights(el, nil)
		cum := make([]int32, len(el))
		sum, heaviest := 0.0, 1.0
		for m := range el {
			cum[m] = int32(math.Min(sum, math.MaxInt32/4)) // a gain of next to nothing at the zenith
			sum += weights[m] * sharesPerMinute
			heaviest = math.Max(heaviest, weights[m])
		}
		ps.setups = append(ps.setups, set)
		ps.weights = append(ps.weights, weights)
		ps.heaviest = append(ps.heaviest, heaviest)
		ps.effective = append(ps.effective, cum)
	}
}

func (r *Receiver) radiometer() radiometer.Receiver {
	return radiometer.Receiver{
		BandMHz: r.BandMHz, TsysK: r.TsysK, ZenithOpacity: r.ZenithOpacity,
		GainKPerJy: r.GainKPerJy, GainCurve: r.GainCurve, Polarizations: r.Polarizations, ChannelMHz: r.ChannelMHz,
	}
}

// pulsar is what decides how well a source can be timed, given its Galactic direction.
func (s *Source) pulsar(lDeg, bDeg float64) radiometer.Pulsar {
	p := radiometer.Pulsar{
		WidthMs: s.WidthMs, JitterUsPerHour: s.JitterUsPerHour, FloorUs: s.FloorUs, Sky408K: s.SkyK, DMPcPerCm3: s.DMPcPerCm3,
		GaussianPulse: s.Template == GaussianTemplate,
	}
	if p.Sky408K == 0 {
		p.Sky408K = radiometer.SkyAt408(lDeg, bDeg)
	}
	if s.Flux != nil {
		p.FluxMJy, p.AtMHz, p.SpectralIndex = s.Flux.MJy, s.Flux.AtMHz, s.Flux.SpectralIndex
	}
	if s.Spin != nil {
		p.PeriodS = 1 / s.Spin.FrequencyHz
		if s.JitterFraction > 0 {
			p.JitterUsPerHour = radiometer.JitterUs(1e3*p.EffectiveWidthMs(), s.JitterFraction, p.PeriodS, 3600)
		}
	}
	return p
}

// minutesFor is how many minutes at the zenith reach a wanted TOA error. ok is false where none do: the aim
// lies below the floor, or flux, spin or width are not known.
func (ps *preparedSource) minutesFor(receiver int, toaUs float64) (minutes float64, ok bool) {
	minutes, err := ps.setups[receiver].MinutesFor(toaUs, 90)
	return minutes, err == nil
}

// toaRule says by which rule the noise counts in a source's TOA errors.
func (s *Source) toaRule() string {
	if s.Template == GaussianTemplate {
		return fmt.Sprintf("a matched Gaussian template, %.2f W/(S/N)", radiometer.GaussianPulseFactor())
	}
	return "W/(S/N)"
}

// scatter is by which share of itself a slot's S/N scatters from visit to visit through scintillation; 0 for a steady
// source, and where it is not known.
func (ps *preparedSource) scatter(receiver, start, end int) float64 {
	if ps.src.Scintillation == nil || end <= start {
		return 0
	}
	r := &ps.setups[receiver].Receiver
	scintles := ps.src.scintillation(r.CentreMHz()).Scintles(60*float64(end-start), r.BandwidthMHz())
	return radiometer.ModulationIndex(scintles)
}

// expect is what a slot brings: the minutes at the zenith that would bring as much, and from them S/N and TOA error, 0
// where these are not known.
func (ps *preparedSource) expect(receiver, start, end int) (zenithMin, snr, toaUs float64) {
	set := &ps.setups[receiver]
	for m := start; m < end; m++ {
		zenithMin += ps.weights[receiver][m]
	}
	if zenithMin == 0 || set.Pulsar.PeriodS == 0 || set.Check() != nil {
		return zenithMin, 0, 0
	}
	return zenithMin, set.SNR(zenithMin, 90), set.TOAErrorUs(zenithMin, 90)
}
