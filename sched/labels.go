package sched

// labelStore holds the labels of a sweep in pages. A sweep may make a million of them; one slice would be copied
// again and again as it grew, and the copies made three quarters of the memory that planning took.
type labelStore struct {
	pages [][]routeLabel
	n     int
}

const (
	pageBits = 13
	pageMask = 1<<pageBits - 1
	pageSize = 1 << pageBits
)

func (s *labelStore) len() int { return s.n }

// clear forgets the labels and keeps the pages.
func (s *labelStore) clear() { s.n = 0 }

func (s *labelStore) at(id int32) *routeLabel { return &s.pages[id>>pageBits][id&pageMask] }

// add keeps a label and returns its number.
func (s *labelStore) add(label routeLabel) int32 {
	id := int32(s.n)
	if int(id>>pageBits) == len(s.pages) {
		s.pages = append(s.pages, make([]routeLabel, pageSize))
	}
	*s.at(id) = label
	s.n++
	return id
}
