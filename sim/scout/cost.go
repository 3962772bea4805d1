package scout

import (
	"math"

	"sixdown/sim/tune"
	"sixdown/xover"
	"sixdown/xover/preferred"
)

// asGood is how far in ratio a part of a list may be off to stand for one of a design, whose final parts are another search's to find:
// half a step of E12.
const asGood = 1.12

// cost returns what the nearest parts of a list cost, none taken more often than it is on the shelf; negative if there are no prices,
// or if the list has none with a price within half a step of E12 of a part, or not enough, which part it then names.
func cost(d *xover.Design, prices tune.Source) (sum float64, missing string) {
	if prices == nil {
		return -1, ""
	}
	taken := map[preferred.Item]int{}
	for i := range d.Parts {
		part := &d.Parts[i]
		off, best := math.Inf(1), preferred.Item{}
		for _, it := range prices.Within(tune.KindOf(part.Kind), part.Value/asGood, part.Value*asGood) {
			if o := math.Abs(math.Log(it.Value / part.Value)); it.Price >= 0 && o < off && (it.Count < 0 || taken[it] < it.Count) {
				off, best = o, it
			}
		}
		if math.IsInf(off, 1) {
			return -1, part.Name
		}
		taken[best]++
		sum += best.Price
	}
	return sum, ""
}
