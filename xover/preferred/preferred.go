package preferred

import (
	"fmt"
	"math"
	"strconv"
)

// Series is one of the E series, named by how many values it has in a decade.
type Series int

// The series.
const (
	E3   Series = 3   // tolerance 40 % and wider
	E6   Series = 6   // 20 %
	E12  Series = 12  // 10 %
	E24  Series = 24  // 5 %
	E48  Series = 48  // 2 %
	E96  Series = 96  // 1 %
	E192 Series = 192 // 0.5 % and tighter
)

// e24 is typed in because it is older than the rule: eight of its values are not the rounded powers. E12, E6 and
// E3 are every second, fourth and eighth of them. IEC 60063:2015, Preferred number series for resistors and
// capacitors.
var e24 = [...]int{10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91}

// The values to which Nearest and Neighbours answer lie between these limits. Inside them 10 to the power needed is a
// whole number that float64 holds exactly, so that one multiplication or division rounds the decimal
// correctly: W. D. Clinger, "How to Read Floating Point Numbers Accurately", PLDI 1990.
const (
	Least    = 1e-18
	Greatest = 1e18
)

// ParseSeries is the inverse of Series.String: "E12". A small e will do.
func ParseSeries(name string) (Series, error) {
	if len(name) > 1 && (name[0] == 'E' || name[0] == 'e') {
		if n, err := strconv.Atoi(name[1:]); err == nil && name[1] != '+' && name[1] != '0' && Series(n).valid() {
			return Series(n), nil
		}
	}
	return 0, fmt.Errorf("series: %q is not one; give E3, E6, E12, E24, E48, E96 or E192", name)
}

// String returns "E12" and so on.
func (s Series) String() string { return "E" + strconv.Itoa(int(s)) }

func (s Series) valid() bool {
	switch s {
	case E3, E6, E12, E24, E48, E96, E192:
		return true
	}
	return false
}

// Values returns one decade of the series, rising: the int(s) values from 1 up to but not including 10. It
// returns nil for a Series that is none.
func (s Series) Values() []float64 {
	if !s.valid() {
		return nil
	}
	values := make([]float64, int(s))
	for i := range values {
		values[i] = s.at(i)
	}
	return values
}

// Within returns the values of the series from low to high, both included, rising. It returns nil when there
// are none, when a limit lies outside Least … Greatest, and for a Series that is none.
func (s Series) Within(low, high float64) []float64 {
	if !s.valid() || !inRange(low) || !inRange(high) || high < low {
		return nil
	}
	var values []float64
	for k := s.floor(low); ; k++ {
		v := s.at(k)
		if v > high {
			return values
		}
		if v >= low {
			values = append(values, v)
		}
	}
}

// Nearest returns the value of the series that is nearest to v by ratio: of the neighbours below and above,
// the one that v is the smaller factor away from, since what a part's tolerance and a network's response
// go by is the ratio. When v is their exact geometric mean it is the one below. It allocates nothing.
//
// It returns NaN when v is not in Least … Greatest (so for 0, a negative number, and NaN) and for a Series that is none.
func (s Series) Nearest(v float64) float64 {
	below, above := s.Neighbours(v)
	if v/below <= above/v {
		return below
	}
	return above
}

// Neighbours returns the greatest value of the series that is not above v and the least that is not below. Both
// are v itself when v is in the series. It allocates nothing. It returns NaNs where Nearest returns NaN.
func (s Series) Neighbours(v float64) (below, above float64) {
	if !s.valid() || !inRange(v) {
		return math.NaN(), math.NaN()
	}
	k := s.floor(v)
	below = s.at(k)
	if below == v {
		return below, below
	}
	return below, s.at(k + 1)
}

func inRange(v float64) bool { return v >= Least && v <= Greatest } // false for NaN

// floor returns the index of the greatest value that is not above v.
func (s Series) floor(v float64) int {
	// The logarithm lands on the place or beside it: the rounded values stray from their powers by less than a step.
	k := int(math.Floor(math.Log10(v) * float64(s)))
	for s.at(k) > v {
		k--
	}
	for s.at(k+1) <= v {
		k++
	}
	return k
}

// at returns the value with index k, counted from 1 upward and downward: at(0) = 1, at(int(s)) = 10.
func (s Series) at(k int) float64 {
	n := int(s)
	decade, i := k/n, k%n
	if i < 0 {
		i += n
		decade--
	}
	digits, places := s.digits(i)
	exponent := decade - places
	if exponent < 0 {
		return float64(digits) / math.Pow10(-exponent)
	}
	return float64(digits) * math.Pow10(exponent)
}

// digits returns value i of the decade as a whole number, and how many of its digits stand after the point.
func (s Series) digits(i int) (digits, places int) {
	if s <= E24 {
		return e24[i*len(e24)/int(s)], 1
	}
	if s == E192 && i == 185 {
		return 920, 2 // where the rule gives 919: the one exception of IEC 60063
	}
	return int(math.Round(100 * math.Pow(10, float64(i)/float64(s)))), 2
}
