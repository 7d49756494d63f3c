package main

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"
)

// The files in the repository must be what the generator writes: who edits one by hand learns it here.
func TestCommittedFilesAreGenerated(t *testing.T) {
	var names []string
	for _, f := range files() {
		names = append(names, f.name)
		got, err := os.ReadFile(filepath.Join("..", filepath.FromSlash(f.name)))
		if err != nil {
			t.Fatal(err)
		}
		if string(got) != f.text {
			t.Errorf("%s differs from what the generator writes, first in line %d", f.name, firstDifference(string(got), f.text))
		}
	}
	entries, err := os.ReadDir(filepath.Join("..", "sources"))
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		if name := "sources/" + e.Name(); !slices.Contains(names, name) {
			t.Errorf("%s is not written by the generator", name)
		}
	}
}

func firstDifference(a, b string) int {
	x, y := strings.Split(a, "\n"), strings.Split(b, "\n")
	for i := range min(len(x), len(y)) {
		if x[i] != y[i] {
			return i + 1
		}
	}
	return min(len(x), len(y)) + 1
}

// Every minute of every observation must be one that the telescope could have spent there.
func TestHistoryKeepsTheLimits(t *testing.T) {
	sources := map[string]source{}
	for _, s := range inventSources() {
		sources[s.name] = s
	}
	log := playHistory(inventSources())
	for i, o := range log {
		s := sources[o.source]
		if i > 0 && o.start.Before(log[i-1].end.Add(90*time.Second)) {
			t.Errorf("%s at %v begins before the telescope is ready", o.source, o.start)
		}
		for at := o.start; !at.After(o.end); at = at.Add(time.Minute) {
			mjd := mjdOf(at)
			ofDate := precess(s.position, mjd)
			az, el := azEl(ofDate, mjd)
			sun, _ := sunAt(mjd)
			if el < lowestDeg(az)+0.5 || el > siteElevationDeg[1]-0.5 || separationDeg(sun, ofDate) < siteSunLimitDeg+0.5 {
				t.Errorf("%s at %v stands at azimuth %.1f, elevation %.1f", o.source, at, az, el)
			}
		}
		if s.eclipsed(mjdOf(o.start), mjdOf(o.end)) {
			t.Errorf("%s at %v is in eclipse", o.source, o.start)
		}
	}
}

// The story of the edge-on binary: three of the coming sessions hold its passage from end to end.
func TestPassagesOfTheEdgeOnBinary(t *testing.T) {
	var whole []string
	for _, s := range inventSources() {
		if s.orbit == nil || s.orbit.sinI < 0.999 {
			continue
		}
		half := 0.02 * s.orbit.periodDays
		for _, session := range coming() {
			for _, c := range s.superiorConjunctions(mjdOf(session.start)+half, mjdOf(session.end())-half) {
				up := true
				for at := c - half; at <= c+half; at += 1.0 / 1440 {
					up = up && visible(precess(s.position, at), at, siteSunLimitDeg)
				}
				for _, b := range session.breaks {
					up = up && (mjdOf(b[1]) <= c-half || mjdOf(b[0]) >= c+half)
				}
				if up {
					whole = append(whole, session.name())
				}
			}
		}
	}
	want := []string{"2026-12-03 night", "2026-12-16 evening", "2027-01-04 night"}
	if !slices.Equal(whole, want) {
		t.Errorf("whole passages in %v, wanted in %v", whole, want)
	}
}
