package ui

import (
	"time"

	"example.org/tallystick/campaigns"
)

// running lets a harness wait for a season.
func running(h *harness) *seasonRun {
	h.world.season.run = &seasonRun{cancel: func() {}, edition: h.world.edition}
	return h.world.season.run
}

// seasonByHand is a season that is written here, so that the screens of the tests change when the interface does.
func seasonByHand(c *campaigns.Campaign) *campaigns.Season {
	day := func(d, h int) time.Time { return time.Date(2026, 12, d, h, 0, 0, 0, time.UTC) }
	row := func(slot int, source, receiver string, at time.Time, min int) campaigns.SlotRow {
		return campaigns.SlotRow{Slot: slot, Source: source, Receiver: receiver, Start: at, End: at.Add(time.Duration(min) * time.Minute), Worth: 1.5}
	}
	s := &campaigns.Season{From: evening, To: day(9, 22)}
	s.Sessions = []campaigns.SeasonSession{
		{Session: &c.Sessions[0], Hours: 4.75, OnSourceMin: 215, Worth: 24.66, Overdue: 4, Rows: []campaigns.SlotRow{
			row(1, "J2216+3344", "L", day(3, 18), 60), row(2, "J0018+5210", "L", day(3, 20), 48)}},
		{Session: &c.Sessions[1], Hours: 3, OnSourceMin: 120, Worth: 11.2, Overdue: 2, Rows: []campaigns.SlotRow{row(1, "J2216+3344", "L", day(9, 19), 40)}},
	}
	s.Cadences = []campaigns.CadenceForecast{
		{Source: "J1347-4410", Aim: "every 14 d with L", EveryDays: 14, Priority: 1, DebtNow: 1, DebtWorst: 1.45, DebtEnd: 1.45, OverdueDays: 6, Due: 1, Outcome: campaigns.CadenceMissed},
		{Source: "J2216+3344", Aim: "every 7 d with L", EveryDays: 7, Priority: 1.5, DebtNow: 1.7, DebtWorst: 1.72, DebtEnd: 0.02, OverdueDays: 1, Due: 1, Planned: 2, Outcome: campaigns.CadenceLate},
		{Source: "J0512-0241", Aim: "every 21 d with L", EveryDays: 21, Priority: 1, DebtNow: 0.4, DebtWorst: 0.7, DebtEnd: 0.7, Due: 0, Outcome: campaigns.CadenceKept},
	}
	s.Connects = []campaigns.ConnectForecast{{Source: "J0231+1905", LimitTurns: 0.1, By: day(7, 3), Planned: day(3, 20)}, {Source: "J2216+3344", LimitTurns: 0.2, By: day(8, 4), Lost: true}}
	s.Debts = []campaigns.AccountRow{{Source: "J1347-4410", Kind: campaigns.Cadence, Aim: "every 14 d with L", Debt: 1.45, Priority: 1, Why: "never observed"}}
	l := campaigns.LSTPressure{Site: c.Sites[0].Name}
	for h := range l.WantedH {
		l.WantedH[h] = 0.2 + float64((h*7)%11)/10
		if h < 8 {
			l.GrantedH[h] = 0.9
			l.PlannedH[h] = 0.6
		}
	}
	s.Pressure = []campaigns.LSTPressure{l}
	return s
}
