package campaigns

import (
	"fmt"
	"strings"
)

// didYouMean names the candidate that looks most like what was written, or is empty when none looks
// like it. The first of equally near ones wins.
func didYouMean(written string, candidates []string) string {
	if near := nearest(written, candidates, 1); len(near) > 0 {
		return fmt.Sprintf("did you mean %q?", near[0])
	}
	return ""
}

// nearest returns at most n candidates that could have been meant, nearest first. A candidate is near
// when at most a third of the longer name would have to be typed again, or when one begins with the other.
func nearest(written string, candidates []string, n int) []string {
	type near struct {
		name string
		far  int
	}
	var found []near
	w := strings.ToLower(written)
	for _, c := range candidates {
		l := strings.ToLower(c)
		far := editDistance(w, l)
		most := max(1, max(len(w), len(l))/3)
		begins := len(w) >= 2 && len(l) >= 2 && (strings.HasPrefix(l, w) || strings.HasPrefix(w, l))
		if (far > most || far >= len(l)) && !begins {
			continue
		}
		at := len(found)
		for at > 0 && found[at-1].far > far {
			at--
		}
		found = append(found, near{})
		copy(found[at+1:], found[at:])
		found[at] = near{c, far}
	}
	var names []string
	for _, f := range found[:min(n, len(found))] {
		names = append(names, f.name)
	}
	return names
}

// editDistance is the least number of letters to insert, delete, change or swap with their neighbour
// that makes b of a (optimal string alignment, after Damerau 1964). Words longer than 100 letters are
// infinitely far from everything: nobody meant them.
func editDistance(a, b string) int {
	s, t := []rune(a), []rune(b)
	if len(s) > 100 || len(t) > 100 {
		return 1 << 30
	}
	before, last, row := make([]int, len(t)+1), make([]int, len(t)+1), make([]int, len(t)+1)
	for j := range last {
		last[j] = j
	}
	for i := 1; i <= len(s); i++ {
		row[0] = i
		for j := 1; j <= len(t); j++ {
			change := 1
			if s[i-1] == t[j-1] {
				change = 0
			}
			row[j] = min(last[j]+1, row[j-1]+1, last[j-1]+change)
			if i > 1 && j > 1 && s[i-1] == t[j-2] && s[i-2] == t[j-1] {
				row[j] = min(row[j], before[j-2]+1)
			}
		}
		before, last, row = last, row, before
	}
	return last[len(t)]
}

// someOf lists names for a message, and says so when there are too many to list.
func someOf(names []string) string {
	const most = 16
	if len(names) == 0 {
		return "none"
	}
	if len(names) <= most {
		return strings.Join(names, ", ")
	}
	return fmt.Sprintf("%s and %d more", strings.Join(names[:most], ", "), len(names)-most)
}
