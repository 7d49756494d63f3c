package campaigns

import "slices"

// LogbookColumns are the columns of a logbook, in the order in which a new one is begun.
func LogbookColumns() []string { return slices.Clone(logbookColumns) }

// MoreColumns are the columns of a logbook that are not ours, in the order of its header.
func (l *Logbook) MoreColumns() []string {
	return slices.DeleteFunc(slices.Clone(l.Header), func(c string) bool { return slices.Contains(logbookColumns, c) })
}

// Cells are what stands in the logbook's own columns, in the order of LogbookColumns.
func (e Entry) Cells() []string {
	cells := make([]string, len(logbookColumns))
	for i := range cells {
		cells[i] = e.cell(i)
	}
	return cells
}

// Corrects says that this entry, written later, takes the place of another.
func (e Entry) Corrects(other Entry) bool {
	return e.Start.Equal(other.Start) && e.Site == other.Site && e.Source == other.Source && e.Receiver == other.Receiver
}

// Unknown returns those of the entries that would change something: what the logbook has already as the last word,
// cell for cell, is only counted.
func (l *Logbook) Unknown(entries []Entry) (fresh []Entry, known int) {
	type key struct {
		start                  int64
		site, source, receiver string
	}
	of := func(e *Entry) key { return key{e.Start.UnixMicro(), e.Site, e.Source, e.Receiver} }
	last := map[key]Entry{}
	for i := range l.Entries {
		last[of(&l.Entries[i])] = l.Entries[i]
	}
	for _, e := range entries {
		if have, ok := last[of(&e)]; ok && have.saysAsMuchAs(e) && e.saysAsMuchAs(have) {
			known++
			continue
		}
		last[of(&e)] = e
		fresh = append(fresh, e)
	}
	return fresh, known
}
