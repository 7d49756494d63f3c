package ui

import "fmt"

// A sourceView shows sources, and can put its cursor on one.
type sourceView interface {
	view
	// subject is the source under the cursor; "" for none.
	subject(w *world) string
	// about says in a few words what the view has of a source; "" if it has nothing.
	about(source string, w *world) string
	// seek puts the cursor on a source that the view has.
	seek(source string, w *world)
}

// newElsewhere offers the views that have something of a source.
func newElsewhere(m *model, source string) *chooser {
	l := &chooser{title: "See " + source + " in", does: "goes there"}
	for i, v := range m.views {
		s, ok := v.(sourceView)
		if !ok || i == m.at {
			continue
		}
		if about := s.about(source, &m.world); about != "" {
			l.add(v.title(), fmt.Sprintf("%-8s %s", v.title(), about), action{verb: goToSource, n: i, text: source}, false)
		}
	}
	return l
}

// elsewhere asks in which view to see the chosen source, or goes there if there is only one.
func (m *model) elsewhere() {
	source := ""
	if v, ok := m.views[m.at].(sourceView); ok && m.world.desk.prepared != nil {
		source = v.subject(&m.world)
	}
	if source == "" {
		m.warn("no source is chosen here")
		return
	}
	switch l := newElsewhere(m, source); len(l.names) {
	case 0:
		m.warn("no other view has anything of %s now", source)
	case 1:
		m.goToSource(l.actions[0].n, source)
	default:
		m.over = l
	}
}

// goToSource shows a view with its cursor on a source.
func (m *model) goToSource(view int, source string) {
	if s, ok := m.views[view].(sourceView); ok {
		m.at = view
		s.seek(source, &m.world)
	}
}

func (v *slate) subject(w *world) string {
	if s, ok := w.desk.slot(); ok {
		return sourceOf(w.desk.prepared.Problem, s)
	}
	return ""
}

// slotOf is the first slot of a source that is not over, or the first of all; -1 if it has none.
func slotOf(source string, w *world) int {
	now, _ := w.nowMinute()
	found := -1
	for i, s := range w.desk.shown().plan.Slots {
		if sourceOf(w.desk.prepared.Problem, s) != source {
			continue
		}
		if s.End > now {
			return i
		}
		if found < 0 {
			found = i
		}
	}
	return found
}

func (v *slate) about(source string, w *world) string {
	i := slotOf(source, w)
	if i < 0 {
		return ""
	}
	r := w.desk.read().rows[i]
	return fmt.Sprintf("slot %d with %s, %s to %s UTC", r.Slot, r.Receiver, clock(r.Start), clock(r.End))
}

func (v *slate) seek(source string, w *world) {
	if i := slotOf(source, w); i >= 0 {
		w.follow = false
		w.desk.choose(i)
	}
}

func (v *arrears) subject(w *world) string {
	if r, ok := v.chosen(w); ok {
		return r.Source
	}
	return ""
}

func (v *arrears) about(source string, w *world) string {
	for i := range w.desk.accounts {
		if r := &w.desk.accounts[i]; r.Source == source {
			return fmt.Sprintf("debt %.2f, %s", r.Debt, aimWords(r))
		}
	}
	return ""
}

func (v *arrears) seek(source string, w *world) {
	v.filter, v.typing = field{}, false
	for i, k := range v.rows(w) {
		if w.desk.accounts[k].Source == source {
			v.list.at = i
			return
		}
	}
}
