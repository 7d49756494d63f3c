package sched

// A Slot is time on source: from minute Start to minute End, after slew, receiver change and overhead.
type Slot struct {
	Node   int    `json:"node"`
	Start  int    `json:"start"`
	End    int    `json:"end"`
	Pinned bool   `json:"pinned,omitempty"`
	Note   string `json:"note,omitempty"` // the observer's; the planner carries it along
}

// A Plan is the slots of a session in time order.
type Plan struct {
	Slots []Slot `json:"slots"`
}
