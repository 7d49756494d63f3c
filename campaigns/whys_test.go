package campaigns

import (
	"regexp"
	"strings"
	"testing"
	"unicode/utf8"
)

var noNumber = regexp.MustCompile(`(?i)\b(nan|[+-]?inf)\b|%!|\n`)

func checkWhy(t *testing.T, where, why string) {
	t.Helper()
	if n := utf8.RuneCountInString(why); n == 0 || n > mostInLine || noNumber.MatchString(why) || strings.TrimSpace(why) != why {
		t.Errorf("%s: %d letters: %q", where, n, why)
	}
}

// Every number that the accounts and the plan's terms show has one line that explains it alone, whatever the logbook holds.
func TestEveryNumberHasItsLine(t *testing.T) {
	f, now := openDemo(t)
	for _, log := range []*Logbook{f.Logbook, nil} {
		rows, err := Arrears(f.Campaign, log, now)
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range rows {
			checkWhy(t, r.Source+", "+r.Aim, r.Why)
			for _, flag := range r.Flags {
				checkWhy(t, r.Source+", "+r.Aim+", flag", flag)
			}
		}
		p, _ := firstSession()
		if log == nil {
			if p, err = Prepare(f.Campaign, log, &f.Campaign.Sessions[3], PrepareOptions{At: now}); err != nil { // the shortest
				t.Fatal(err)
			}
		}
		for _, j := range p.Problem.Jobs {
			for _, term := range j.Terms {
				checkWhy(t, p.Session.Name+", "+j.Source+", "+term.Label, term.Why)
			}
		}
	}
}

// The worst of every kind of line, all at once.
func TestTheLongestLines(t *testing.T) {
	c := connection{limit: 0.123456, predicted: 123456, next: utcOf(61400), deadline: utcOf(61390), most: "the orbit's, whose error is not given (" + countParts[1].keys + ")"}
	checkWhy(t, "count", c.why())
	campaign, _ := passing(t)
	campaign.Sources[0].Orbit.SigmaEpochDays = 0.06
	campaign.Sources[0].Aims[0].Wanted = 100000
	at := campaign.Sessions[5].End
	rows, err := Arrears(campaign, nil, at)
	if err != nil {
		t.Fatal(err)
	}
	checkWhy(t, "passages", rows[0].Why)
	campaign.Sources[0].Orbit.SigmaEpochDays = 0
	if rows, err = Arrears(campaign, nil, at); err != nil {
		t.Fatal(err)
	}
	checkWhy(t, "passages without errors", rows[0].Why)

	// One that pairs two receivers near the Sun, and reaches its aim with neither.
	faint := pulsarIn(Aim{Kind: Cadence, Receivers: []string{"L", "S"}, ToaUs: 0.123456, MinFraction: 0.6, EveryDays: 14, PairDays: 2})
	faint.Sources[0].RADeg, faint.Sources[0].DecDeg = 243.652115042, -22.508691936
	faint.Sources[0].FloorUs = 0.654321
	if rows, err = Arrears(faint, nil, faint.Sessions[0].Start); err != nil {
		t.Fatal(err)
	}
	checkWhy(t, "out of reach", rows[0].Why)
}
