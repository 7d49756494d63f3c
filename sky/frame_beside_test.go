package sky

import (
	"testing"
	"time"

	"pgregory.net/rapid"
)

// What a frame takes from its neighbours is what it would have worked out, to the last bit, across leap seconds too.
func TestAFrameBesideOthersIsTheSame(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		at := time.Date(2016, 12, 20, 12, 0, 0, 0, time.UTC).AddDate(0, 0, rapid.IntRange(0, 25).Draw(t, "day"))
		if rapid.Bool().Draw(t, "any day") {
			at = drawInstant(t)
		}
		want := mustFrameOf(t, at)
		var others []*Frame
		for _, days := range rapid.SliceOf(rapid.IntRange(-4, 4)).Draw(t, "others") {
			var other *Frame // nil where there is none yet
			if days != 0 {
				other = mustFrameOf(t, at.Add(time.Duration(days)*24*time.Hour))
			}
			others = append(others, other)
		}
		got, err := NewFrameBeside(at, others...)
		if err != nil {
			t.Fatal(err)
		}
		if *got != *want {
			t.Fatalf("beside others it is %+v, alone %+v", got, want)
		}
	})
}

func TestNoonsShareWhatLiesBetweenThem(t *testing.T) {
	noon := time.Date(2026, 12, 3, 12, 0, 0, 0, time.UTC)
	for days := range 5 {
		other, err := NewFrame(noon.AddDate(0, 0, days-2))
		if err != nil {
			t.Fatal(err)
		}
		for k := -1; k <= 1; k++ {
			shared := nodeAmong([]*Frame{nil, other}, jdTT(noon)+float64(k)) != nil
			if off := k - (days - 2); shared != (off >= -1 && off <= 1) {
				t.Errorf("a frame %d days off, node %d: shared %t", days-2, k, shared)
			}
		}
	}
}
