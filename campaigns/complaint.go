package campaigns

import (
	"fmt"
	"slices"
	"strings"
)

// A Complaint is one thing that is wrong in a file: where it stands, what was found there and what is
// accepted.
type Complaint struct {
	File     string `json:"file"`
	Line     int    `json:"line"` // 1 is the first; 0 when the whole file is meant
	Key      string `json:"key"`  // the entry and the key, such as `site "Alder Flat", height_m`
	Found    string `json:"found"`
	Accepted string `json:"accepted"`
	Hint     string `json:"hint,omitempty"` // the likely cure, when it can be guessed
}

// Error says it all in one line, and the hint on a line of its own.
func (c Complaint) Error() string {
	var b strings.Builder
	b.WriteString(c.File)
	if c.Line > 0 {
		fmt.Fprintf(&b, ":%d", c.Line)
	}
	b.WriteString(": ")
	if c.Key != "" {
		b.WriteString(c.Key)
		b.WriteString(": ")
	}
	fmt.Fprintf(&b, "found %s; accepted: %s", c.Found, c.Accepted)
	if c.Hint != "" {
		b.WriteString("\n    hint: ")
		b.WriteString(c.Hint)
	}
	return b.String()
}

// Complaints are everything that is wrong, in the order of the files.
type Complaints []Complaint

// Error gives one complaint after the other.
func (cs Complaints) Error() string {
	lines := make([]string, len(cs))
	for i, c := range cs {
		lines[i] = c.Error()
	}
	return strings.Join(lines, "\n")
}

// err is nil when there is nothing to complain about: an empty Complaints in an error would not be.
func (cs Complaints) err() error {
	if len(cs) == 0 {
		return nil
	}
	return cs
}

// A report gathers complaints from several files.
type report struct {
	placed []placed
}

type placed struct {
	Complaint
	file int // the order in which the files were read
}

func (r *report) add(file int, c Complaint) {
	r.placed = append(r.placed, placed{c, file})
}

// complaints returns them in the order of the files and of their lines; what stands on the same line
// stays in the order in which it was found.
func (r *report) complaints() Complaints {
	slices.SortStableFunc(r.placed, func(a, b placed) int {
		if a.file != b.file {
			return a.file - b.file
		}
		return a.Line - b.Line
	})
	var cs Complaints
	for _, p := range r.placed {
		cs = append(cs, p.Complaint)
	}
	return cs
}
