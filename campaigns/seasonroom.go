package campaigns

import "math"

// A demand is hours that a source asks for, and the share of its time within limits that falls in each hour of sidereal
// time: the shares add up to 1.
type demand struct {
	hours float64
	up    [lstHours]float64
}

// Hours of which a source is up for less than a part of its fullest hour are left to others.
const leastPartOfHour = 1. / 3

// roomSteps is how often demands are shared out anew. The hours that find no room are then right to better than a
// hundredth of all that is wanted.
const roomSteps = 2000

// placeHours puts demands where hours are granted, so that as much as possible finds room, and nobody has more of the
// hours that several want than another. It returns the hours wanted by hour of sidereal time: those that found room,
// and those that did not, spread evenly over the time in which their source is up.
//
// Each demand is handed out over the hours in proportion to what it got for it the last time; an hour that many want
// gives each of them less. This comes to rest where the crowding of all hours that a demand is spread over is the
// same, and then the least possible finds no room.
//
// Source:  proportional response, Zhang 2011, Theor. Comput. Sci. 412, 2691
// Checked: TestPlaceHours, against a maximum flow
func placeHours(demands []demand, granted [lstHours]float64) (wanted [lstHours]float64) {
	bids := make([][lstHours]float64, len(demands))
	for i := range demands {
		bids[i] = demands[i].firstBids(granted)
	}
	var crowding [lstHours]float64
	for range roomSteps {
		crowding = crowdingOf(bids, granted)
		for i := range bids {
			got, all := bids[i], 0.0
			for h, bid := range bids[i] {
				if bid > 0 {
					got[h] = bid / crowding[h]
					all += got[h]
				}
			}
			for h := range got {
				if all > 0 {
					bids[i][h] = demands[i].hours * got[h] / all
				}
			}
		}
	}
	crowding = crowdingOf(bids, granted)
	for i, d := range demands {
		left := d.hours
		for h, bid := range bids[i] {
			if bid > 0 {
				room := bid / math.Max(1, crowding[h])
				wanted[h] += room
				left -= room
			}
		}
		for h, share := range d.up {
			wanted[h] += math.Max(0, left) * share
		}
	}
	return wanted
}

// firstBids hands a demand out over the granted hours in which its source is up.
func (d *demand) firstBids(granted [lstHours]float64) (bids [lstHours]float64) {
	most := 0.0
	for _, up := range d.up {
		most = math.Max(most, up)
	}
	all := 0.0
	for h, up := range d.up {
		if granted[h] > 0 && up > 0 && up >= most*leastPartOfHour {
			bids[h] = granted[h]
			all += granted[h]
		}
	}
	for h := range bids {
		if all > 0 {
			bids[h] *= d.hours / all
		}
	}
	return bids
}

// crowdingOf is the hours handed out over the hours granted.
func crowdingOf(bids [][lstHours]float64, granted [lstHours]float64) (crowding [lstHours]float64) {
	for i := range bids {
		for h, bid := range bids[i] {
			crowding[h] += bid
		}
	}
	for h := range crowding {
		if granted[h] > 0 {
			crowding[h] /= granted[h]
		}
	}
	return crowding
}
