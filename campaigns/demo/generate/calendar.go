package main

import (
	"fmt"
	"time"
)

// A session is telescope time: granted in the past, or still to come.
type session struct {
	start   time.Time
	minutes int
	rx      []string
	breaks  [][2]time.Time
	remark  string

	// the past only
	outages []outage
	note    string // remark in the note of its first line
}

// An outage is a part of a past session that was lost, in minutes from its start.
type outage struct {
	from, to int
	note     string
}

func (s session) end() time.Time { return s.start.Add(time.Duration(s.minutes) * time.Minute) }

func (s session) has(rx string) bool {
	for _, r := range s.rx {
		if r == rx {
			return true
		}
	}
	return false
}

// name says the date of the start and the part of the day that the middle falls into, by the clock on the
// wall in winter (UTC + 1).
func (s session) name() string {
	middle := s.start.Add(time.Duration(s.minutes/2+60) * time.Minute).Hour()
	part := "night"
	switch {
	case middle >= 5 && middle < 11:
		part = "morning"
	case middle >= 11 && middle < 14:
		part = "midday"
	case middle >= 14 && middle < 17:
		part = "afternoon"
	case middle >= 17 && middle < 22:
		part = "evening"
	}
	return s.start.Format("2006-01-02") + " " + part
}

func both() []string { return []string{"L", "U"} }

func pause(from time.Time, minutes int) [2]time.Time {
	return [2]time.Time{from, from.Add(time.Duration(minutes) * time.Minute)}
}

// coming returns the ten sessions that have been granted.
func coming() []session {
	return []session{
		{start: on(2026, 12, 3, 18, 0), minutes: 630, rx: both(), breaks: [][2]time.Time{pause(on(2026, 12, 3, 22, 45), 20)},
			remark: "The long winter night. The edge-on binary passes behind its companion at 00:52."},
		{start: on(2026, 12, 7, 5, 0), minutes: 420, rx: both(),
			remark: "The edge-on binary passes again at 05:38, but it is setting: only the first part is to be had."},
		{start: on(2026, 12, 12, 14, 30), minutes: 540, rx: both(),
			breaks: [][2]time.Time{pause(on(2026, 12, 12, 16, 0), 30), pause(on(2026, 12, 12, 20, 30), 15)},
			remark: "From the last of the summer sky into the winter night; the azimuth bearing is greased at 16:00. The very\n" +
				"eccentric binary is at periastron, low in the west, as the session begins."},
		{start: on(2026, 12, 16, 18, 0), minutes: 240, rx: []string{"L"},
			remark: "Four hours, and only one receiver: U is being refitted. A passage of the edge-on binary fills most of it."},
		{start: on(2026, 12, 21, 1, 30), minutes: 660, rx: both(),
			breaks: [][2]time.Time{pause(on(2026, 12, 21, 5, 0), 20), pause(on(2026, 12, 21, 9, 0), 20)},
			remark: "The longest: winter night into the day, when the Sun is near."},
		{start: on(2026, 12, 24, 9, 0), minutes: 300, rx: both(),
			remark: "Christmas Eve: five hours of the crowded summer sky, by daylight."},
		{start: on(2026, 12, 30, 16, 0), minutes: 600, rx: both(), breaks: [][2]time.Time{pause(on(2026, 12, 30, 20, 0), 30)},
			remark: "Another long evening."},
		{start: on(2027, 1, 4, 20, 0), minutes: 480, rx: both(), breaks: [][2]time.Time{pause(on(2027, 1, 4, 22, 20), 20)},
			remark: "The third passage of the edge-on binary, at 00:32; the break was moved out of its way."},
		{start: on(2027, 1, 9, 11, 0), minutes: 360, rx: both(),
			remark: "A short January day: once more the summer sky."},
		{start: on(2027, 1, 14, 22, 0), minutes: 630, rx: both(), breaks: [][2]time.Time{pause(on(2027, 1, 15, 5, 0), 20)},
			remark: "The twelve-day binary passes behind its companion at 01:40."},
	}
}

// Weather and machinery that are part of the story; the rest is drawn by lot.
var (
	campaignBegan   = on(2025, 5, 3, 0, 0)
	lastPastSession = on(2026, 11, 30, 17, 30)
	driveFailed     = on(2026, 2, 9, 0, 0) // in the middle of a session
	driveMended     = on(2026, 2, 24, 0, 0)
	noLFrom         = on(2026, 7, 27, 0, 0) // cryostat of the L receiver warm
	noLUntil        = on(2026, 8, 20, 0, 0)
)

// askedFor are starts of past sessions that were asked for because a binary passed behind its companion.
var askedFor = []time.Time{
	on(2026, 1, 11, 19, 10),
	on(2026, 7, 19, 7, 0),
	on(2026, 9, 30, 20, 30),
	on(2026, 10, 20, 23, 20),
}

// moved returns the start that was asked for within a day and a half, or the start itself.
func moved(start time.Time) time.Time {
	for _, t := range askedFor {
		if t.Sub(start).Abs() < 36*time.Hour {
			return t
		}
	}
	return start
}

// past returns the sessions that have been, in order: one every four or five days, at any hour.
func past() []session {
	var out []session
	day := campaignBegan
	for day.Before(lastPastSession.AddDate(0, 0, -3)) {
		d := newDice("session of " + day.Format("2006-01-02"))
		s := session{
			start:   moved(day.Add(time.Duration(d.unit()*24*6) * 10 * time.Minute)),
			minutes: 10 * int(d.between(50, 64)),
			rx:      both(),
		}
		s.trouble(d)
		out = append(out, s)
		day = day.Add(time.Duration(24*d.between(4.0, 5.5)) * time.Hour).Truncate(24 * time.Hour)
	}
	out = append(out, session{start: lastPastSession, minutes: 560, rx: both()})
	for i := 1; i < len(out); i++ {
		if out[i].start.Before(out[i-1].end()) {
			panic(fmt.Sprint("past sessions overlap: ", out[i].start))
		}
	}
	return out
}

// trouble gives a past session what went wrong in it.
func (s *session) trouble(d dice) {
	luck, from, length := d.unit(), d.unit(), d.unit()
	if !s.start.Before(noLFrom) && s.start.Before(noLUntil) {
		s.rx = []string{"U"}
		s.note = "L cryostat warm, U only"
	}
	begin := int(from * float64(s.minutes) * 0.8)
	switch {
	case !s.start.Before(driveFailed) && s.start.Before(driveMended):
		s.outages = []outage{{0, s.minutes, "azimuth drive in repair"}}
		if s.start.Before(driveFailed.AddDate(0, 0, 4)) {
			s.outages = []outage{{190, s.minutes, "azimuth drive failed"}}
		}
	case luck < 0.045:
		s.outages = []outage{{0, s.minutes, weather(s.start, d)}}
	case luck < 0.13:
		s.outages = []outage{{begin, s.minutes, weather(s.start, d)}}
	case luck < 0.22:
		s.outages = []outage{{begin, begin + 20 + int(length*80), d.one("elevation drive tripped", "power cut, restarted", "backend hung, restarted", "helium compressor tripped", "interlock: people on the structure")}}
	}
}

func weather(t time.Time, d dice) string {
	switch m := t.Month(); {
	case m == time.December || m <= time.February:
		return d.one("snow load, dish stowed", "wind above the limit, dish stowed", "ice on the drive rail")
	case m >= time.June && m <= time.August:
		return d.one("lightning, dish stowed", "hail, dish stowed")
	default:
		return d.one("wind above the limit, dish stowed", "storm, dish stowed")
	}
}
