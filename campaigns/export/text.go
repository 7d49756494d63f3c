package export

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"
	"time"

	"example.org/tallystick/campaigns"
)

// The operator's sheet: 80 columns of ASCII, pages of at most 60 lines divided by form feeds, every
// page with the same head. Somebody who has never seen the program can work from it, so the columns
// are explained before they are used and a slot is never divided between two pages.
const (
	sheetColumns = 80
	pageLines    = 60
)

// A block is lines that stay together on one page.
type block []string

// Text writes the operator's sheet.
func Text(w io.Writer, s Sheet) error {
	front := []block{facts(s), legend(s), safety()}
	if warning := limitsBroken(s); warning != nil {
		front = slices.Insert(front, 0, warning)
	}
	pages := paginate(front, tableHead(s), slots(s), computedFrom(s))

	out := bufio.NewWriter(w)
	for i, page := range pages {
		if i > 0 {
			out.WriteString("\f")
		}
		for _, line := range append(pageHead(s, i+1, len(pages)), page...) {
			out.WriteString(strings.TrimRight(ASCII(line), " "))
			out.WriteString("\n")
		}
	}
	return out.Flush()
}

// pageHead is the same on every page but for its number, so that a loose page can be put back.
func pageHead(s Sheet, page, of int) []string {
	return []string{
		spread("SLOT LIST  "+s.Campaign, fmt.Sprintf("page %d of %d", page, of)),
		spread("Session "+s.Session.Name+", "+s.Site.Name, "made "+minute(s.MadeAt)+" UTC"),
		"Advisory: the observatory's rules and the operator's judgement come first.",
		rule('='),
	}
}

const headLines = 4

// paginate lays the blocks out in pages. A page that begins among the rows begins with their head.
func paginate(front []block, head block, rows []block, foot block) [][]string {
	const room = pageLines - headLines
	var pages [][]string
	var page []string
	put := func(b, again block) {
		for part := range slices.Chunk(b, room-len(again)) {
			if len(page) > 0 && len(page)+len(part) > room {
				pages, page = append(pages, page), slices.Clone(again)
			}
			page = append(page, part...)
		}
	}
	for _, b := range front {
		put(b, nil)
	}
	put(append(slices.Clone(head), rows[0]...), nil)
	for _, b := range rows[1:] {
		put(b, head)
	}
	put(foot, nil)
	return append(pages, page)
}

func limitsBroken(s Sheet) block {
	n := s.Broken()
	if n == 0 {
		return nil
	}
	b := block{rule('!')}
	b = append(b, wrap(fmt.Sprintf("WARNING: %s of this list %s a limit, kept so by the observer. Each is marked !! with the limit "+
		"and the number. Do not run such a slot before somebody in charge has agreed to it.",
		count(n, "slot"), choose(n == 1, "breaks", "break")), "", "")...)
	return append(b, rule('!'), "")
}

func facts(s Sheet) block {
	t := s.Session
	var b block
	add := func(label, text string) { b = append(b, wrap(text, pad(label, 11), pad("", 11))...) }
	add("Session", fmt.Sprintf("%s to %s UTC (%s), LST %s to %s", minute(t.Start), minute(t.End), hours(t.End.Sub(t.Start)), clock(s.LSTStartH), clock(s.LSTEndH)))
	if zone := s.Site.TimeZone; zone != nil && zone != time.UTC {
		const local = "2006-01-02 15:04 -07:00"
		add("local time", fmt.Sprintf("%s to %s, %s", t.Start.In(zone).Format(local), t.End.In(zone).Format(local), zone))
	}
	add("Site", fmt.Sprintf("%s, latitude %s, longitude %s, height %.0f m", s.Site.Name, signed(s.Site.LatitudeDeg, "N", "S"), signed(s.Site.LongitudeDeg, "E", "W"), s.Site.HeightM))
	limits := fmt.Sprintf("elevation %g to %g deg and above the horizon mask; at least %g deg from the Sun; %s", s.Site.ElevationLimitsDeg[0], s.Site.ElevationLimitsDeg[1], s.Site.SunLimitDeg, s.Site.Air())
	if altaz(s) {
		limits += fmt.Sprintf("; cable %+g to %+g deg", s.Site.AzimuthTravelDeg[0], s.Site.AzimuthTravelDeg[1])
	}
	add("Limits", limits)
	for i, r := range s.Receivers {
		add(choose(i == 0, "Receivers", ""), fmt.Sprintf("%s: %g to %g MHz; %g min to bring it into the beam", r.Name, r.BandMHz[0], r.BandMHz[1], r.ChangeMin))
	}
	var onSource time.Duration
	for _, r := range s.Rows {
		onSource += r.End.Sub(r.Start)
	}
	add("Slots", fmt.Sprintf("%d, together %s on source; set-up of %g min at the head of every slot", len(s.Rows), hours(onSource), t.SlotOverheadMin))
	for i, br := range t.Breaks {
		add(choose(i == 0, "Breaks", ""), fmt.Sprintf("%s to %s UTC: nothing moves, nothing is observed", minute(br[0]), br[1].UTC().Format("15:04")))
	}
	for i, m := range s.Missing {
		add(choose(i == 0, "INCOMPLETE", ""), m+" should be in this list and could have been, but is not")
	}
	return append(b, "")
}

func legend(s Sheet) block {
	b := block{"How to read it"}
	add := func(word, text string) { b = append(b, wrap(text, "  "+pad(word, 9), pad("", 11))...) }
	add("No", "number of the slot. Work down the list; * after it: fixed by the observer, do not shift it")
	add("Min", "minutes on source, from the time on the first line to the time on the second")
	add("UTC, LST", "universal and local sidereal time, hours:minutes (LST with seconds)")
	add("Az", "compass azimuth in degrees: north 0, east 90")
	add("El", "elevation in degrees")
	if altaz(s) {
		add("Cable", "the mount's own azimuth, which tells the cable turn: Az, or Az plus or minus full turns of 360. Go to the start by Cable, not by Az, or the cable may end up a turn off")
	} else {
		add("HA", "hour angle, hours, west positive")
	}
	add("before", "what happens before the time on source: the move from the last slot (a receiver change runs beside it), then set-up, then waiting")
	return append(b, "")
}

func safety() block { return append(wrap(Safety, "SAFETY     ", pad("", 11)), "") }

func tableHead(s Sheet) block {
	return block{
		fmt.Sprintf("%-4s %-18s %-9s %3s       %-5s  %-8s  %5s  %4s  %6s", "No", "Source", "Receiver", "Min", "UTC", "LST", "Az", "El", choose(altaz(s), "Cable", "HA")),
		rule('-'),
	}
}

// slots gives each slot a block of its own, with the breaks and the dates between them where they fall.
func slots(s Sheet) []block {
	var blocks []block
	breaks := s.Session.Breaks
	day := ""
	receiver := ""
	for i, r := range s.Rows {
		var b block
		for len(breaks) > 0 && !breaks[0][0].After(r.Start) {
			b = append(b, breakLine(breaks[0]), "")
			breaks = breaks[1:]
		}
		if d := r.Start.UTC().Format(time.DateOnly); d != day {
			b = append(b, "     "+d+" UTC")
			day = d
		}
		b = append(b, slotLines(s, r)...)
		b = append(b, wrap(beforeSlot(r, i == 0, receiver), "     before: ", pad("", 13))...)
		if r.Note != "" {
			b = append(b, wrap(strings.Join(strings.Fields(r.Note), " "), "     note: ", pad("", 11))...)
		}
		for _, breach := range r.Breaches {
			b = append(b, wrap("BREAKS A LIMIT: "+breach, "  !! ", "     ")...)
		}
		receiver = r.Receiver
		blocks = append(blocks, append(b, ""))
	}
	var tail block
	for _, br := range breaks {
		tail = append(tail, breakLine(br), "")
	}
	if len(s.Rows) == 0 {
		tail = append(tail, "     no slots", "")
	}
	tail = append(tail, "     "+minute(s.Session.End)+" UTC: the session ends", "")
	return append(blocks, tail)
}

func slotLines(s Sheet, r campaigns.SlotRow) block {
	number := fmt.Sprintf("%3d%s", r.Slot, choose(r.Pinned, "*", " "))
	source, receiver := ASCII(r.Source), ASCII(r.Receiver)
	var b block
	if len(source) > 18 || len(receiver) > 9 { // a name is never cut: it gets a line of its own
		b = append(b, wrap(source+", receiver "+receiver, number+" ", "     ")...)
		number, source, receiver = "", "", ""
	}
	line := func(number, source, receiver, minutes, word string, t time.Time, lst, az, el, turn float64) string {
		return fmt.Sprintf("%-4s %-18s %-9s %3s %-4s  %s  %s  %5s  %4.1f  %s",
			number, source, receiver, minutes, word, t.UTC().Format("15:04"), clockSeconds(lst), compass(az), el,
			choose(altaz(s), fmt.Sprintf("%+6.1f", az), fmt.Sprintf("%+6.2f", turn)))
	}
	return append(b,
		line(number, source, receiver, fmt.Sprint(int(r.End.Sub(r.Start).Minutes())), "from", r.Start, r.LSTStartH, r.AzStartDeg, r.ElStartDeg, r.HAStartH),
		line("", "", "", "", "to", r.End, r.LSTEndH, r.AzEndDeg, r.ElEndDeg, r.HAEndH))
}

func beforeSlot(r campaigns.SlotRow, first bool, receiverBefore string) string {
	move := "move " + seconds(r.MoveSec)
	switch {
	case first: // from wherever the telescope is: nobody knows how long that takes
		by := r.Start.Add(-time.Duration(r.OverheadSec) * time.Second).UTC()
		return "be at the source by " + by.Format("15:04:05") + ", set-up " + seconds(r.OverheadSec)
	case r.Receiver != receiverBefore:
		move = "change to receiver " + r.Receiver + " and move " + seconds(r.MoveSec)
	}
	parts := []string{move, "set-up " + seconds(r.OverheadSec)}
	switch {
	case r.WaitSec > 0:
		parts = append(parts, "wait "+seconds(r.WaitSec))
	case r.WaitSec < 0:
		parts = append(parts, "TOO LITTLE TIME by "+seconds(-r.WaitSec))
	}
	return strings.Join(parts, ", ")
}

func breakLine(b [2]time.Time) string {
	return fmt.Sprintf("     ---- break %s to %s UTC: nothing moves, nothing is observed ----", b[0].UTC().Format("15:04"), b[1].UTC().Format("15:04"))
}

func computedFrom(s Sheet) block {
	b := block{rule('-'), "What this list was computed from"}
	add := func(label, text string) { b = append(b, wrap(text, "  "+pad(label, 9), pad("", 11))...) }
	add("campaign", fmt.Sprintf("%s: %s, %s", s.Campaign, count(s.SourceCount, "source"), count(s.Entries, "logbook entry")))
	add("session", fmt.Sprintf("%s at %s", s.Session.Name, s.Site.Name))
	add("made", fmt.Sprintf("%s UTC by tallystick %s, %s", minute(s.MadeAt), s.Version, choose(s.Saved, "from the plan saved with the campaign", "planned for this sheet and not saved")))
	add("worth", worthText(s)+fmt.Sprintf("; slot ends on a grid of %d min", s.GridMin))
	if n := len(s.LeftOut); n > 0 {
		add("left out", fmt.Sprintf("%s of a source with a receiver got no slot; `tallystick plan` says why", count(n, "pairing")))
	}
	return b
}

func worthText(s Sheet) string {
	switch share, known := s.Distance(); {
	case known && share == 0:
		return fmt.Sprintf("%.3f, the most that any plan of this session can be worth", s.Worth)
	case known:
		return fmt.Sprintf("%.3f; no plan can be worth more than %.3f, so this one is at most %.2f %% below the best", s.Worth, s.Ceiling, 100*share)
	}
	return fmt.Sprintf("%.3f (1 = one observation that is exactly due, of a source of priority 1); no ceiling yet", s.Worth)
}

func altaz(s Sheet) bool { return s.Site.Mount == campaigns.AltAz || s.Site.Mount == "" }

// compass reduces a mount azimuth to 0..360 so that rounding never shows 360.0.
func compass(azDeg float64) string {
	tenths := int(math.Round(azDeg * 10))
	tenths = ((tenths % 3600) + 3600) % 3600
	return fmt.Sprintf("%.1f", float64(tenths)/10)
}

func clock(hours float64) string {
	m := int(math.Round(hours*60)) % (24 * 60)
	return fmt.Sprintf("%02d:%02d", m/60, m%60)
}

func clockSeconds(hours float64) string {
	s := int(math.Round(hours*3600)) % (24 * 3600)
	return fmt.Sprintf("%02d:%02d:%02d", s/3600, s/60%60, s%60)
}

func minute(t time.Time) string { return t.UTC().Format("2006-01-02 15:04") }

func hours(d time.Duration) string {
	m := int(d.Round(time.Minute).Minutes())
	return fmt.Sprintf("%d h %02d min", m/60, m%60)
}

func seconds(s int) string {
	switch {
	case s < 60:
		return fmt.Sprintf("%d s", s)
	case s >= 3600:
		return fmt.Sprintf("%d h %d min", s/3600, s/60%60)
	case s%60 == 0:
		return fmt.Sprintf("%d min", s/60)
	}
	return fmt.Sprintf("%d min %d s", s/60, s%60)
}

func signed(deg float64, positive, negative string) string {
	return fmt.Sprintf("%.4f %s", math.Abs(deg), choose(deg < 0, negative, positive))
}

func count(n int, thing string) string {
	switch {
	case n == 1:
		return "1 " + thing
	case strings.HasSuffix(thing, "ry"):
		return fmt.Sprintf("%d %sies", n, strings.TrimSuffix(thing, "y"))
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

func choose(yes bool, a, b string) string {
	if yes {
		return a
	}
	return b
}
