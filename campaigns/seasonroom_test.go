package campaigns

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// mostRoom is the most of the demands that finds room, by augmenting paths (Ford and Fulkerson 1956): another way to the
// same number.
func mostRoom(demands []demand, granted [lstHours]float64) float64 {
	n := len(demands)
	// Nodes: the demands, the hours, then source and sink.
	from, to := n+lstHours, n+lstHours+1
	capacity := make([][]float64, n+lstHours+2)
	for i := range capacity {
		capacity[i] = make([]float64, n+lstHours+2)
	}
	for i := range demands {
		capacity[from][i] = demands[i].hours
		for h, bid := range demands[i].firstBids(granted) {
			if bid > 0 {
				capacity[i][n+h] = math.Inf(1)
			}
		}
	}
	for h, g := range granted {
		capacity[n+h][to] = g
	}
	total := 0.0
	for {
		before := make([]int, len(capacity))
		for i := range before {
			before[i] = -1
		}
		queue := []int{from}
		before[from] = from
		for len(queue) > 0 && before[to] < 0 {
			at := queue[0]
			queue = queue[1:]
			for next, c := range capacity[at] {
				if c > 1e-9 && before[next] < 0 {
					before[next] = at
					queue = append(queue, next)
				}
			}
		}
		if before[to] < 0 {
			return total
		}
		flow := math.Inf(1)
		for at := to; at != from; at = before[at] {
			flow = math.Min(flow, capacity[before[at]][at])
		}
		for at := to; at != from; at = before[at] {
			capacity[before[at]][at] -= flow
			capacity[at][before[at]] += flow
		}
		total += flow
	}
}

func TestPlaceHours(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var granted [lstHours]float64
		for h := range granted {
			granted[h] = float64(rapid.IntRange(0, 6).Draw(t, "granted"))
		}
		var demands []demand
		all := 0.0
		for range rapid.IntRange(1, 6).Draw(t, "demands") {
			d := demand{hours: float64(rapid.IntRange(1, 20).Draw(t, "hours"))}
			first, n := rapid.IntRange(0, 23).Draw(t, "rises"), rapid.IntRange(1, 24).Draw(t, "up")
			for k := range n {
				d.up[(first+k)%lstHours] = 1 / float64(n)
			}
			demands = append(demands, d)
			all += d.hours
		}
		l := LSTPressure{GrantedH: granted, WantedH: placeHours(demands, granted)}
		if got := SumH(l.WantedH); math.Abs(got-all) > 1e-6 {
			t.Fatalf("%.4f h wanted in all, not %.4f", got, all)
		}
		if ask, least := SumH(l.AskH()), all-mostRoom(demands, granted); math.Abs(ask-least) > 0.01*all {
			t.Fatalf("%.4f h to ask for; the least is %.4f of %.0f", ask, least, all)
		}
	})
}

// Two sources want the same two granted hours and share them; a third is up when nothing is granted.
func TestPlaceHoursByHand(t *testing.T) {
	var granted [lstHours]float64
	granted[3], granted[4] = 2, 2
	up := func(hours ...int) (share [lstHours]float64) {
		for _, h := range hours {
			share[h] = 1 / float64(len(hours))
		}
		return share
	}
	l := LSTPressure{GrantedH: granted, WantedH: placeHours([]demand{{3, up(3, 4)}, {3, up(4, 5)}, {1, up(20, 21)}}, granted)}
	// 4 of 6 hours find room; of the first 3 h source 1 is missing, of the second 1; 1 h at 20 and 21.
	ask := l.AskH()
	for h, want := range map[int]float64{3: 0.5, 4: 1, 5: 0.5, 20: 0.5, 21: 0.5} {
		if math.Abs(ask[h]-want) > 0.01 {
			t.Errorf("hour %d: %.3f h to ask for, wanted %.3f", h, ask[h], want)
		}
	}
}
