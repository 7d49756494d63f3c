package sched

import (
	"fmt"
	"time"
)

// clock returns the minute as UTC hours and minutes.
func (p *Problem) clock(minute int) string {
	return p.Start.Add(time.Duration(minute) * time.Minute).UTC().Format("15:04")
}

// span returns a slot's time on source: "19:04–19:31".
func (p *Problem) span(s Slot) string { return p.clock(s.Start) + "–" + p.clock(s.End) }

// jobName returns source and receiver: "J0101+0101 L".
func (p *Problem) jobName(job int) string {
	j := p.Jobs[job]
	return j.Source + " " + p.Receivers[j.Receiver].Name
}

func (p *Problem) nodeName(node int) string { return p.jobName(p.Nodes[node].Job) }

// String writes the worth in units with two decimals: "0.83".
func (m Micro) String() string {
	sign := ""
	if m < 0 {
		sign, m = "-", -m
	}
	cents := (m + 5000) / 10000
	return fmt.Sprintf("%s%d.%02d", sign, cents/100, cents%100)
}
