package campaigns

import (
	"math"
	"time"

	"example.org/tallystick/sched"
)

// Instant is the time of a minute of the session.
func (p *Prepared) Instant(minute int) time.Time {
	return p.Problem.Start.Add(time.Duration(minute) * time.Minute)
}

// Minute is the minute of the session that t falls in; negative before it.
func (p *Prepared) Minute(t time.Time) int {
	return int(math.Floor(t.Sub(p.Problem.Start).Minutes()))
}

// Track is where the source of a job stands during the session.
func (p *Prepared) Track(job int) *Track { return &p.Tracks[p.sourceOf(job)] }

// sourceOf is the index of a job's source in Campaign.Sources.
func (p *Prepared) sourceOf(job int) int { return p.sourceByName[p.Problem.Jobs[job].Source] }

// SlotRows is the slot list of a plan, with the limits that any slot breaks.
func (p *Prepared) SlotRows(plan sched.Plan) []SlotRow {
	verdict := sched.Verify(p.Problem, plan)
	rows := make([]SlotRow, len(plan.Slots))
	for i := range plan.Slots {
		rows[i] = p.slotRow(plan, i)
	}
	for _, b := range verdict.Breaches {
		if b.Slot >= 0 && b.Slot < len(rows) {
			rows[b.Slot].Breaches = append(rows[b.Slot].Breaches, b.Text)
		}
	}
	return rows
}

func (p *Prepared) slotRow(plan sched.Plan, i int) SlotRow {
	slot := plan.Slots[i]
	node := p.Problem.Nodes[slot.Node]
	job := p.Problem.Jobs[node.Job]
	ps := &p.sources[p.sourceOf(node.Job)]
	start, end := p.clamp(slot.Start), p.clamp(slot.End)
	from, to := p.lookAt(ps, start), p.lookAt(ps, end)
	azStart, azEnd := p.mountAzimuth(node, start), p.mountAzimuth(node, end)

	row := SlotRow{
		Slot: i + 1, Source: job.Source, Receiver: p.Problem.Receivers[job.Receiver].Name,
		Start: p.Instant(slot.Start), End: p.Instant(slot.End),
		AzStartDeg: azStart, ElStartDeg: from.ElDeg, AzEndDeg: azEnd, ElEndDeg: to.ElDeg,
		Turn:      int(math.Floor(azStart / 360)),
		LSTStartH: p.LSTHours[start], LSTEndH: p.LSTHours[end],
		HAStartH: from.HourAngleDeg / 15, HAEndH: to.HourAngleDeg / 15,
		ParStartDeg: from.ParallacticDeg, ParEndDeg: to.ParallacticDeg,
		Worth:  float64(p.Problem.JobWorth(node.Job, slot.Start, slot.End)) / float64(sched.Unit),
		Pinned: slot.Pinned, Note: slot.Note,
	}
	row.RADeg, row.DecDeg = ps.icrsAt(p.Instant(slot.Start))
	if ps.src.Orbit != nil {
		from, to := ps.knowledge.phase(p.Instant(start)), ps.knowledge.phase(p.Instant(end))
		row.PhaseStart, row.PhaseEnd = &from, &to
	}
	row.ZenithMin, row.SNR, row.ToaUs = ps.expect(job.Receiver, start, end)
	row.ToaRule = ps.src.toaRule()
	row.SNRScatter = ps.scatter(job.Receiver, start, end)
	row.MoveSec, row.OverheadSec, row.WaitSec = p.before(plan, i)
	return row
}

// clamp brings a minute into the session: an edit may reach beyond it before it is taken back.
func (p *Prepared) clamp(minute int) int { return min(max(minute, 0), p.Problem.Minutes) }

// before is what happens between the slot before (or the session's start, or a break) and this one, in seconds.
func (p *Prepared) before(plan sched.Plan, i int) (move, overhead, wait int) {
	prev, end := sched.None, 0
	if i > 0 {
		prev, end = plan.Slots[i-1].Node, plan.Slots[i-1].End
	}
	slot := plan.Slots[i]
	setup := p.Problem.SetupBetween(prev, end, slot.Node, slot.Start)
	move = max(setup.SlewSec, setup.ChangeSec)
	return move, setup.OverheadSec, (slot.Start-setup.FreeMin)*60 - move - setup.OverheadSec
}
