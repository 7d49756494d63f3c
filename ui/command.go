package ui

import (
	"context"
	"errors"
	"fmt"
	"os"
	"slices"
	"sync"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

// files is the campaign's folder, which is for one command at a time.
type files struct {
	*campaigns.Folder
	mu sync.Mutex
}

// book is the logbook as it is now. What is added later goes into another.
func (f *files) book() *campaigns.Logbook {
	f.mu.Lock()
	defer f.mu.Unlock()
	return f.Logbook
}

// guarded turns a fault in a command into a message, so that the terminal and the work are saved.
func guarded(work func() tea.Msg) tea.Cmd {
	return func() (msg tea.Msg) {
		defer func() {
			if r := recover(); r != nil {
				msg = panicMsg{fmt.Sprint(r)}
			}
		}()
		return work()
	}
}

// tickCmd wakes at the next whole second of the machine's clock.
func tickCmd() tea.Cmd {
	return tea.Every(time.Second, func(t time.Time) tea.Msg { return tickMsg(t) })
}

func prepareCmd(f *files, s *campaigns.Session, at time.Time) tea.Cmd {
	return guarded(func() tea.Msg {
		f.mu.Lock()
		saved, unread := f.Plan(s.Name)
		f.mu.Unlock()
		p, err := campaigns.Prepare(f.Campaign, f.book(), s, campaigns.PrepareOptions{At: at, Keep: saved.Sources()})
		if err != nil {
			return preparedMsg{session: s.Name, err: err}
		}
		return preparedMsg{session: s.Name, prepared: p, saved: saved, err: unread}
	})
}

func reviewCmd(f *files, s *campaigns.Session) tea.Cmd {
	return guarded(func() tea.Msg {
		log := f.book()
		rows, err := campaigns.Arrears(f.Campaign, log, s.Start)
		return reviewedMsg{session: s.Name, accounts: rows, year: pastYear(log, s.Start), err: err}
	})
}

// planCmd plans around the pins of a plan and around what has begun before a minute. Progress goes to
// work.reports, which it closes.
func planCmd(ctx context.Context, work *planning, p *sched.Problem, from snapshot, minute int, first bool, rounds int) tea.Cmd {
	q := around(p, from.plan, minute)
	var begun []sched.Slot
	for i, s := range q.Pins {
		if !s.Pinned { // not pinned by the observer, but no longer to be changed
			begun = append(begun, s)
			q.Pins[i].Pinned = true
		}
	}
	warm, learned := from.plan.Clone(), work.desk.learned
	return guarded(func() tea.Msg {
		defer close(work.reports)
		o := sched.Options{Rounds: rounds, Learned: learned, Workers: planners(), Progress: func(r sched.Result) {
			select {
			case work.reports <- r:
			default: // the screen is behind; the next report says more
			}
		}}
		if !first {
			o.Warm = &warm
		}
		r, err := sched.Solve(ctx, q, o)
		for i, s := range r.Plan.Slots {
			s.Pinned = false
			if slices.Contains(begun, s) {
				r.Plan.Slots[i] = s
			}
		}
		proved, _ := sched.BoundOf(q, r)
		return plannedMsg{work: work, result: r, first: first, bars: from.bars, proved: proved, err: err}
	})
}

// listenCmd waits for the next report of a planning run.
func listenCmd(work *planning) tea.Cmd {
	return func() tea.Msg {
		r, ok := <-work.reports
		if !ok {
			return nil
		}
		return progressMsg{work, r}
	}
}

func saveCmd(f *files, d *desk, s snapshot, plan *campaigns.SavedPlan, over, leave bool) tea.Cmd {
	return guarded(func() tea.Msg {
		f.mu.Lock()
		defer f.mu.Unlock()
		err := f.SavePlan(plan)
		if over && errors.Is(err, campaigns.ErrChanged) {
			// What is there now has been seen and may go: reading it makes it ours to replace.
			if _, err = f.Plan(plan.Session); err == nil {
				err = f.SavePlan(plan)
			}
		}
		note := "saved in " + f.Name()
		if f.Demo() {
			note = "saved, but only until you quit: the demonstration lives in memory (W saves it into a folder)"
		}
		return savedMsg{desk: d, saved: s, note: note, err: err, leave: leave}
	})
}

func exportCmd(c *Config, format, path string, p *campaigns.Prepared, plan sched.Plan, proved sched.Bound, over bool) tea.Cmd {
	return guarded(func() tea.Msg {
		if _, err := os.Lstat(path); err == nil && !over {
			return exportedMsg{format: format, path: path, exists: true}
		}
		note, err := c.Export(format, path, p, plan, proved)
		return exportedMsg{format: format, path: path, note: note, err: err}
	})
}

func saveCampaignCmd(f *files, dir string) tea.Cmd {
	return guarded(func() tea.Msg {
		f.mu.Lock()
		defer f.mu.Unlock()
		return campaignSavedMsg{dir, f.SaveTo(dir)}
	})
}

func findDraftsCmd(key string) tea.Cmd {
	return guarded(func() tea.Msg { return draftsMsg{findDrafts(key)} })
}

func keepDraftsCmd(drafts []draft, gone []draft) tea.Cmd {
	return guarded(func() tea.Msg {
		var errs []error
		for _, d := range drafts {
			errs = append(errs, d.keep())
		}
		for _, d := range gone {
			errs = append(errs, d.remove())
		}
		return draftKeptMsg{errors.Join(errs...)}
	})
}

func deleteDraftCmd(d draft) tea.Cmd {
	return guarded(func() tea.Msg { return draftKeptMsg{d.remove()} })
}

// dropDraftsCmd removes what this run has kept of these sessions.
func (m *model) dropDraftsCmd(desks []*desk) tea.Cmd {
	var gone []draft
	for _, d := range desks {
		gone = append(gone, m.drafts[d.session.Name]...)
	}
	return keepDraftsCmd(nil, gone)
}
