package ui

import (
	"fmt"
	"image"
	"math"
	"strings"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
	"example.org/tallystick/sky"
	"example.org/tallystick/sky/radiometer"
	"example.org/tallystick/ui/cell"
	"example.org/tallystick/ui/theme"
)

// read is everything about the chosen slot.
func (v *slate) read(w *world) (string, []line) {
	d := w.desk
	if _, ok := d.slot(); !ok {
		return "", nil
	}
	return v.heading(w), slotLines(w, d.chosen)
}

func (v *slate) heading(w *world) string {
	row := w.desk.read().rows[w.desk.chosen]
	return fmt.Sprintf("slot %d: %s with %s, %s to %s UTC", row.Slot, row.Source, row.Receiver, clock(row.Start), clock(row.End))
}

// drawDetails writes as much about the chosen slot as there is room for.
func (v *slate) drawDetails(w *world, c *cell.Canvas, g *theme.Glyphs, beside bool) {
	cw, h := c.Size()
	title, lines := v.read(w)
	if lines == nil {
		return
	}
	drawPane(c, g, title, lines, cw, h, beside)
}

// drawPane writes a heading and as many wrapped lines as fit below it.
func drawPane(c *cell.Canvas, g *theme.Glyphs, title string, lines []line, w, h int, beside bool) {
	if !beside {
		c.Put(0, 0, strings.Repeat(g.Rule, w), theme.Muted)
		c.Put(1, 0, " "+cell.Fit(title, min(cell.Width(title), w-4))+" ", theme.Strong)
	} else {
		c.Put(1, 0, cell.Fit(title, w-1), theme.Strong)
	}
	in := c.Sub(image.Rect(1, 1, w, h))
	iw, ih := in.Size()
	all := wrapLines(lines, iw)
	drawLines(in, all, labelWidth(lines))
	if len(all) > ih && ih > 0 {
		more := " Enter: all "
		y := 0
		if beside {
			y = h - 1
		}
		c.Put(w-len(more)-1, y, more, theme.Accent)
	}
}

// slotLines tell everything about a slot, what matters most first.
func slotLines(w *world, i int) []line {
	d := w.desk
	r := d.read()
	row := &r.rows[i]
	slot := r.plan.Slots[i]
	job := r.problem.Jobs[r.problem.Nodes[slot.Node].Job]
	why := r.explain(i, w.planFrom())

	var lines []line
	add := func(label string, ink theme.Ink, format string, args ...any) {
		lines = append(lines, line{label, fmt.Sprintf(format, args...), ink})
	}
	for _, b := range row.Breaches {
		add("! limit", theme.Broken, "%s", b)
	}
	add("points", theme.Plain, "el %.1f to %.1f, az %.1f to %.1f deg, cable turn %d%s", row.ElStartDeg, row.ElEndDeg, row.AzStartDeg, row.AzEndDeg, row.Turn, airWords(row))
	add("expects", theme.Plain, "%s", expects(row)+worthWords(row.Worth, why.Terms))
	for _, t := range why.Terms {
		if t.Worth > 0 {
			add(" ", theme.Muted, "%s for %s: %s", t.Worth, t.Label, t.Why)
		}
	}
	length := fmt.Sprintf("%d min on source%s, of use from %d to %d", slot.End-slot.Start, asGoodAs(row, &job), job.MinMin, job.MaxMin)
	if row.Pinned {
		length += "; pinned"
	}
	add("length", theme.Plain, "%s", length)
	add("before", theme.Plain, "move %s, set-up %s, wait %s", seconds(row.MoveSec), seconds(row.OverheadSec), seconds(waitSec(w, i)))
	if why.StartBy != "" {
		add("no sooner", theme.Plain, "%s", why.StartBy)
	}
	if why.EndBy != "" {
		add("no later", theme.Plain, "%s", why.EndBy)
	}
	if why.NextBest != "" {
		add("instead", theme.Plain, "%s", why.NextBest)
	}
	if row.ToaUs > 0 {
		add("TOA error", theme.Plain, "%s", toaWords(row))
	}
	add("sky", theme.Plain, "LST %s to %s, HA %s to %s, parallactic angle %.0f to %.0f deg",
		hours(row.LSTStartH), hours(row.LSTEndH), signedHours(row.HAStartH), signedHours(row.HAEndH), row.ParStartDeg, row.ParEndDeg)
	if row.PhaseStart != nil && row.PhaseEnd != nil {
		add("phase", theme.Plain, "orbit %.3f to %.3f turns from the ascending node", *row.PhaseStart, *row.PhaseEnd)
	}
	sunDeg := d.prepared.Track(r.problem.Nodes[slot.Node].Job).SunDeg
	add("Sun", theme.Plain, "never closer than %.0f deg; limit %.0f%s", sunDeg, job.Facts.SunLimit, windWords(w, row, sunDeg))
	if row.Note != "" {
		add("note", theme.Plain, "%s", row.Note)
	}
	return lines
}

// airWords says how much air is in the line of sight, where it is worth a word: from half as much again as overhead.
func airWords(row *campaigns.SlotRow) string {
	a, b := sky.AirMass(row.ElStartDeg), sky.AirMass(row.ElEndDeg)
	if max(a, b) < 1.5 {
		return ""
	}
	return fmt.Sprintf(", air %.1f to %.1f times that overhead", a, b)
}

// windWords says by how much the solar wind delays a slot's pulses in the middle of its band where the Sun is nearest, and
// whether that is to be trusted.
func windWords(w *world, row *campaigns.SlotRow, sunDeg float64) string {
	for i := range w.campaign.Receivers {
		r := &w.campaign.Receivers[i]
		if r.Name != row.Receiver || r.Site != w.desk.prepared.Site.Name || !(sunDeg > 0) {
			continue
		}
		mhz := (r.BandMHz[0] + r.BandMHz[1]) / 2
		text := fmt.Sprintf("; the solar wind delays by %.2g us at %.0f MHz", 1e6*radiometer.DispersionSec(radiometer.SolarWindDM(radiometer.WindDensity, sunDeg), mhz), mhz)
		if sunDeg < radiometer.WindUnreliableDeg {
			text += fmt.Sprintf(", as a mean: fits of it were left with up to %.2g us, and timing is flagged", radiometer.WindResidualUs(mhz))
		}
		return text
	}
	return ""
}

// asGoodAs says how many minutes at the zenith a slot's minutes are worth, where it matters: calibration counts minutes as
// they pass.
func asGoodAs(row *campaigns.SlotRow, job *sched.Job) string {
	const tellable = 0.05
	if minutes := row.End.Sub(row.Start).Minutes(); job.Must || !(math.Abs(row.ZenithMin-minutes) > tellable*minutes) {
		return ""
	}
	return fmt.Sprintf(", as good as %.0f at the zenith", row.ZenithMin)
}

// waitSec is what is left before a slot after move and set-up: while the session is under way, of the time
// from now on.
func waitSec(w *world, i int) int {
	r := w.desk.read()
	row := &r.rows[i]
	now, ok := w.nowMinute()
	if !ok || r.plan.Slots[i].Start <= now {
		return row.WaitSec
	}
	left := row.Start.Sub(w.desk.prepared.Instant(now))
	return max(0, min(row.WaitSec, int(left.Seconds())-row.MoveSec-row.OverheadSec))
}

func expects(row *campaigns.SlotRow) string {
	snr := "S/N " + number(row.SNR)
	if row.SNRScatter >= 0.01 {
		snr += fmt.Sprintf(" (scintillation scatters it by %.0f %%)", 100*row.SNRScatter)
	}
	switch {
	case row.SNR == 0 && row.ToaUs == 0:
		return "no S/N known; "
	case row.ToaUs == 0:
		return snr + "; "
	}
	return fmt.Sprintf("%s, TOA error %s us; ", snr, number(row.ToaUs))
}

// toaWords says what a slot's TOA error is made of, and by which rule.
func toaWords(row *campaigns.SlotRow) string {
	return fmt.Sprintf("noise by %s, jitter and floor where known", row.ToaRule)
}

// worthWords adds a slot's worth up, aims of one kind together.
func worthWords(total float64, terms []sched.TermShare) string {
	var kinds []sched.TermKind
	sums := map[sched.TermKind]sched.Micro{}
	for _, t := range terms {
		if t.Worth > 0 && sums[t.Kind] == 0 {
			kinds = append(kinds, t.Kind)
		}
		sums[t.Kind] += t.Worth
	}
	text := fmt.Sprintf("worth %.2f", total)
	for i, k := range kinds {
		sign := " + "
		if i == 0 {
			sign = " = "
		}
		text += fmt.Sprintf("%s%s %s", sign, sums[k], k)
	}
	return text
}
