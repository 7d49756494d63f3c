package ui

import (
	"context"
	"errors"
	"fmt"
	"time"

	tea "github.com/charmbracelet/bubbletea"

	"example.org/tallystick/campaigns"
)

// seasonState is the season as it was last played, and the one being played.
type seasonState struct {
	run     *seasonRun
	result  *campaigns.Season
	edition int // of the logbook that result was played from
	trouble string
}

// A seasonRun is a season being played.
type seasonRun struct {
	cancel  context.CancelFunc
	edition int
	reached seasonReport
	reports chan seasonReport
}

// A seasonReport says how far a season has been played.
type seasonReport struct {
	done, all int
	session   string
}

func (r *seasonRun) words() string {
	if r.reached.all == 0 {
		return "playing the season; Esc stops it"
	}
	return fmt.Sprintf("playing session %d of %d, %s; Esc stops it", r.reached.done+1, r.reached.all, r.reached.session)
}

// seasonProgressMsg: a season has been played so far.
type seasonProgressMsg struct {
	run    *seasonRun
	report seasonReport
}

// seasonMsg: a season has been played.
type seasonMsg struct {
	run    *seasonRun
	season *campaigns.Season
	err    error
}

// startSeason plays the season beside everything else.
func (m *model) startSeason() tea.Cmd {
	m.stopSeason()
	ctx, cancel := context.WithCancel(context.Background())
	run := &seasonRun{cancel: cancel, edition: m.world.edition, reports: make(chan seasonReport, 4)}
	m.world.season.run = run
	return tea.Batch(seasonCmd(ctx, m.world.folder, run, m.world.now), listenSeasonCmd(run))
}

func (m *model) stopSeason() {
	if s := &m.world.season; s.run != nil {
		s.run.cancel()
		s.run = nil
	}
}

func seasonCmd(ctx context.Context, f *files, run *seasonRun, at time.Time) tea.Cmd {
	return guarded(func() tea.Msg {
		defer close(run.reports)
		s, err := campaigns.PlaySeason(ctx, f.Campaign, f.book(), at, campaigns.SeasonOptions{
			Progress: func(done, all int, session string) {
				select {
				case run.reports <- seasonReport{done, all, session}:
				default: // the screen is behind; the next report says more
				}
			},
		})
		return seasonMsg{run, s, err}
	})
}

// listenSeasonCmd waits for the next report of a season.
func listenSeasonCmd(run *seasonRun) tea.Cmd {
	return func() tea.Msg {
		r, ok := <-run.reports
		if !ok {
			return nil
		}
		return seasonProgressMsg{run, r}
	}
}

func (m *model) receiveSeasonProgress(msg seasonProgressMsg) tea.Cmd {
	msg.run.reached = msg.report
	return listenSeasonCmd(msg.run)
}

func (m *model) receiveSeason(msg seasonMsg) {
	s := &m.world.season
	if msg.run != s.run {
		return // stopped, or overtaken
	}
	s.run.cancel()
	s.run = nil
	switch {
	case errors.Is(msg.err, context.Canceled):
	case msg.err != nil:
		s.trouble = msg.err.Error()
		m.warn("the season was not played: %v", msg.err)
	default:
		s.result, s.edition, s.trouble = msg.season, msg.run.edition, ""
		m.tell("the season is played: %s", seasonSummary(msg.season))
	}
}

// outcomes counts the cadences of each outcome.
func outcomes(s *campaigns.Season) (kept, late, missed int) {
	for i := range s.Cadences {
		switch s.Cadences[i].Outcome {
		case campaigns.CadenceKept:
			kept++
		case campaigns.CadenceLate:
			late++
		default:
			missed++
		}
	}
	return kept, late, missed
}

func seasonSummary(s *campaigns.Season) string {
	kept, late, missed := outcomes(s)
	ask := 0.0
	for i := range s.Pressure {
		ask += campaigns.SumH(s.Pressure[i].AskH())
	}
	return fmt.Sprintf("of %s %d kept, %d late, %d missed; %.0f h to ask for", count(len(s.Cadences), "cadence"), kept, late, missed, ask)
}
