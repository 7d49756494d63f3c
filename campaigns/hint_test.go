package campaigns

import (
	"slices"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"
)

func TestEditDistance(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{{"", "abc", 3}, {"kitten", "sitting", 3}, {"cadecne", "cadence", 1}, {"ca", "abc", 3}, {"émile", "emile", 1}} {
		if got := editDistance(c.a, c.b); got != c.want {
			t.Errorf("%q, %q: %d, want %d", c.a, c.b, got, c.want)
		}
	}
	word := rapid.StringMatching(`[a-c]{0,8}`)
	rapid.Check(t, func(t *rapid.T) {
		a, b := word.Draw(t, "a"), word.Draw(t, "b")
		d := editDistance(a, b)
		if d != editDistance(b, a) || d > max(len(a), len(b)) || d < max(len(a), len(b))-min(len(a), len(b)) || (d == 0) != (a == b) {
			t.Fatalf("%q, %q: %d", a, b, d)
		}
	})
}

func TestNearest(t *testing.T) {
	keys := []string{"slew_deg_per_min", "settle_s", "sun_limit_deg", "name"}
	for written, want := range map[string]string{"slew_deg_per_s": "slew_deg_per_min", "nmae": "name", "sun_limit": "sun_limit_deg", "colour": "", "x": ""} {
		if got := strings.Join(nearest(written, keys, 1), ""); got != want {
			t.Errorf("%q: %q, want %q", written, got, want)
		}
	}
	if got := didYouMean("S", []string{"L"}); got != "" {
		t.Errorf("a letter is not a misspelling of another: %q", got)
	}
}

func TestSessionByName(t *testing.T) {
	c := mustLoad(t, "testdata/sample")
	first, second := c.Sessions[0], c.Sessions[1]
	for _, k := range []struct {
		name, want string
		now        time.Time
	}{
		{first.Name, first.Name, second.End},
		{"next", first.Name, first.Start.Add(-time.Hour)},
		{"", first.Name, first.Start.Add(time.Hour)}, // under way
		{"next", second.Name, first.End},             // ended this instant
	} {
		if s, err := c.Session(k.name, k.now); err != nil || s.Name != k.want {
			t.Errorf("%q at %v: %v, %v", k.name, k.now, s, err)
		}
	}
	_, err := c.Session("2026-12-02 night", first.Start)
	if err == nil || !slices.ContainsFunc([]string{first.Name}, func(n string) bool { return strings.Contains(err.Error(), n) }) {
		t.Errorf("the error does not name a near session: %v", err)
	}
	if _, err := c.Session("next", second.End); err == nil || !strings.Contains(err.Error(), second.Name) {
		t.Errorf("no session is left, but: %v", err)
	}
}
