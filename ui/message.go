package ui

import (
	"time"

	"example.org/tallystick/campaigns"
	"example.org/tallystick/sched"
)

// Messages come from outside: from the clock, from signals, and from commands that have finished.

type signalMsg struct{}

type tickMsg time.Time

// preparedMsg: a session has been prepared, with its saved plan if it has one.
type preparedMsg struct {
	session  string
	prepared *campaigns.Prepared
	saved    *campaigns.SavedPlan
	err      error
}

// reviewedMsg: the accounts at the start of a session, with when each source can next be observed.
type reviewedMsg struct {
	session  string
	accounts []campaigns.AccountRow
	year     map[string]string
	err      error
}

// progressMsg: planning has come so far.
type progressMsg struct {
	work   *planning
	result sched.Result
}

// plannedMsg: planning has ended.
type plannedMsg struct {
	work   *planning
	result sched.Result
	first  bool        // the session's first plan, which is not an edit
	bars   []string    // that it was planned with
	proved sched.Bound // meaningful if the result has a ceiling
	err    error
}

type savedMsg struct {
	desk  *desk
	saved snapshot
	note  string
	err   error
	leave bool
}

// exportedMsg: a file has been written, or exists already and was not.
type exportedMsg struct {
	format, path, note string
	exists             bool
	err                error
}

type campaignSavedMsg struct {
	dir string
	err error
}

// draftsMsg: work left behind by an earlier run.
type draftsMsg struct{ drafts []draft }

// draftKeptMsg: the drafts on disk are level with these editions.
type draftKeptMsg struct{ err error }

type panicMsg struct{ what string }
