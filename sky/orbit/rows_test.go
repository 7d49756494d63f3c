package orbit

import (
	"testing"

	"example.org/tallystick/sky/outside"
)

func TestMain(m *testing.M) {
	outside.Main(m, map[string]string{"ORB-030": "time scales are changed where files are read: campaigns/ephemeris asserts it"})
}

func mustNew(t testing.TB, el Elements) Orbit {
	t.Helper()
	o, err := New(el)
	if err != nil {
		t.Fatal(err)
	}
	return o
}
