package ui

import (
	"testing"

	"example.org/tallystick/campaigns"
)

// demonstration opens the built-in campaign, which is large.
func demonstration(b *testing.B) *harness {
	f, err := campaigns.OpenDemo()
	if err != nil {
		b.Fatal(err)
	}
	h := start(b, f)
	now, _ := f.Now()
	h.world.now = now
	h.size(200, 60)
	return h
}

// BenchmarkView is one frame of the slate at 200 by 60.
func BenchmarkView(b *testing.B) {
	h := demonstration(b)
	for b.Loop() {
		h.View()
	}
}

// BenchmarkArrearsView is one frame of the arrears at 200 by 60.
func BenchmarkArrearsView(b *testing.B) {
	h := demonstration(b)
	h.keys("2")
	for b.Loop() {
		h.View()
	}
}

// BenchmarkMoveToFrame is a key that moves the cursor, and its frame.
func BenchmarkMoveToFrame(b *testing.B) {
	h := demonstration(b)
	for i := 0; b.Loop(); i++ {
		h.keys([]string{"down", "up"}[i%2])
		h.View()
	}
}

// BenchmarkEditToFrame is an edit, with every limit judged again, and its frame.
func BenchmarkEditToFrame(b *testing.B) {
	h := demonstration(b)
	for i := 0; b.Loop(); i++ {
		h.keys([]string{"-", "+"}[i%2])
		h.View()
	}
}

// BenchmarkPickerToFrame is the list of candidates at the cursor minute, and its frame.
func BenchmarkPickerToFrame(b *testing.B) {
	h := demonstration(b)
	for b.Loop() {
		h.keys("i")
		h.View()
		h.keys("esc")
	}
}

// BenchmarkArrearsAfterEdit is the first look at the arrears after an edit: every reason is found anew.
func BenchmarkArrearsAfterEdit(b *testing.B) {
	h := demonstration(b)
	for b.Loop() {
		h.world.desk.view = nil
		h.keys("2")
		h.View()
		h.keys("1")
	}
}

// Frames of the views that have more to show, at 200 by 60, with all there is to show.
func BenchmarkOrbitsView(b *testing.B) { benchmarkView(b, "3") }

func BenchmarkSeasonView(b *testing.B) { benchmarkView(b, "4", "P", "right") }

func BenchmarkLogbookView(b *testing.B) { benchmarkView(b, "5") }

func benchmarkView(b *testing.B, keys ...string) {
	h := demonstration(b)
	h.keys(keys...)
	h.View()
	for b.Loop() {
		h.View()
	}
}

// BenchmarkLogbookFilterToFrame is a letter of a filter over the whole logbook, and its frame.
func BenchmarkLogbookFilterToFrame(b *testing.B) {
	h := demonstration(b)
	h.keys("5", "/", "type:J0")
	for b.Loop() {
		h.keys("type:1")
		h.View()
		h.keys("backspace")
	}
}
