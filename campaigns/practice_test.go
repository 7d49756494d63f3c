package campaigns

import (
	"encoding/csv"
	"os"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"example.org/tallystick/sky/radiometer"
)

// statedByTheCampaign says why a row of what campaigns do has nothing to be compared with.
const statedByTheCampaign = "a campaign states it; the program has no value of its own"

// Rows of testdata/campaign.csv with which a value of the program is compared below: a default, or the starter campaign,
// which is what a new user begins with.
func practice(t *testing.T, starter *Campaign) map[string]float64 {
	t.Helper()
	site, session := &starter.Sites[0], &starter.Sessions[0]
	monthly := loadStarter(t, strings.Replace(starterText, "every_days = 14", "every_days = 28", 1))
	return map[string]float64{
		"CAM-004": starter.Sources[1].Aims[0].EveryDays,
		"CAM-005": starter.Sources[1].Aims[0].EveryDays,
		"CAM-009": monthly.Sources[1].Aims[0].PairDays, // by default a seventh of the cadence
		"CAM-014": session.SlotOverheadMin,
		"CAM-019": site.SettleSec,
		"CAM-020": site.ElevationLimitsDeg[0],
		"CAM-021": site.ElevationLimitsDeg[1],
		"CAM-022": radiometer.WindUnreliableDeg,
	}
}

// The other rows, and why nothing is compared.
var notPractice = map[string]string{
	"CAM-001": statedByTheCampaign, "CAM-002": statedByTheCampaign, "CAM-003": statedByTheCampaign,
	"CAM-006": "a count of pulsars, not of anything here", "CAM-007": statedByTheCampaign,
	"CAM-008": statedByTheCampaign, "CAM-010": "minutes follow from toa_us: TestMinutesFor in sky/radiometer",
	"CAM-011": "RAD-040 in sky/radiometer", "CAM-012": statedByTheCampaign, "CAM-013": statedByTheCampaign,
	"CAM-015": statedByTheCampaign, "CAM-016": statedByTheCampaign,
	"CAM-017": "rates are the site's; RAD-090 and -091 in sky have these", "CAM-018": statedByTheCampaign,
	"CAM-023": "sun_limit_deg is required of every site",
	"CAM-024": "what comes out of a plan, not what goes in", "CAM-025": "hours to ask for are told, none is assumed",
	"CAM-026": "a ramp is the aim's; the flag of a glitch is compared below",
	"CAM-027": "sky/timing takes it for the most that a glitch does: PHA-050",
	"CAM-028": "the next date comes from the covariance, not from a schedule: PHA-060 to -062 in sky/timing",
	"CAM-029": "sky/array: ALL-021", "CAM-030": statedByTheCampaign, "CAM-031": "sky/array: ALL-012",
	"CAM-032": "jitter is the source's; RAD-050 and -051 in sky/radiometer are its ends",
	"CAM-033": "nothing is kept free unless a break says so",
}

func loadStarter(t *testing.T, text string) *Campaign {
	t.Helper()
	text = strings.NewReplacer("NIGHT", "night", "START", "2027-01-01T19:00:00Z", "END", "2027-01-02T03:00:00Z").Replace(text)
	c, err := LoadFS(fstest.MapFS{CampaignFile: {Data: []byte(text)}}, "")
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// What the program takes without being told, and what its starter says, is what published campaigns do.
func TestUsualPractice(t *testing.T) {
	file, err := os.Open("testdata/campaign.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	r := csv.NewReader(file)
	r.Comment = '#'
	lines, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	ours := practice(t, loadStarter(t, starterText))
	known := map[string]bool{}
	for _, l := range lines[1:] {
		id, value := l[0], l[3]
		known[id] = true
		got, compared := ours[id]
		switch reason := notPractice[id]; {
		case compared == (reason != ""):
			t.Errorf("%s (%s): compared %v, reason %q", id, l[2], compared, reason)
		case compared:
			if low, high := valueRange(t, value); got < low || got > high {
				t.Errorf("%s (%s): %g, campaigns have %s %s", id, l[2], got, value, l[4])
			}
		}
	}
	for id := range ours {
		if !known[id] {
			t.Errorf("no row %s", id)
		}
	}
	for id := range notPractice {
		if !known[id] {
			t.Errorf("no row %s", id)
		}
	}
	// CAM-026: recoveries of up to a hundred days.
	if freshGlitch < 100*24*time.Hour {
		t.Errorf("a glitch is flagged for %v", freshGlitch)
	}
}

// valueRange reads 10-30 or 14.
func valueRange(t *testing.T, text string) (low, high float64) {
	t.Helper()
	a, b, ok := strings.Cut(text, "-")
	if !ok {
		b = a
	}
	return number(t, a), number(t, b)
}
