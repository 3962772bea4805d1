package circuit_test

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"sixdown/sim/circuit"
)

// unit is the greatest relative error of rounding once to float64.
const unit = 0x1p-53

// agreement is how near the solver must come to the reference, relative to each number on its own.
const agreement = 1e-9

// A yardstick collects, for one quantity, how far the solver is from the reference.
type yardstick struct {
	what  string
	count int
	worst float64 // relative error, where agreement can be asked for
	at    string

	yielding int // numbers for which it cannot
	most     float64
	mostAt   string
	reached  float64

	nothing int // numbers that are zero but for rounding

	misses    int // since the last settle
	farthest  float64
	worstMiss string
}

// compare holds got against want. noise is the relative error that must be granted; where that exceeds the agreement
// asked for, noise is the limit.
func (y *yardstick) compare(got, want complex128, noise float64, where func() string) {
	y.count++
	relative, limit := cmplx.Abs(got-want)/cmplx.Abs(want), agreement
	switch {
	case want == 0 || !(noise < 0.1):
		// Nothing is there, and want is what rounding left: judge the number itself, per volt of the source.
		y.nothing++
		relative, limit = cmplx.Abs(got-want), 1e-12
	case noise > limit:
		limit = noise
		y.yielding++
		y.reached = max(y.reached, relative)
		if noise > y.most {
			y.most, y.mostAt = noise, where()
		}
	case relative > y.worst:
		y.worst, y.at = relative, where()
	}
	if relative <= limit {
		return
	}
	y.misses++
	if !(relative/limit <= y.farthest) {
		y.farthest = relative / limit
		y.worstMiss = fmt.Sprintf("%s is %v, the reference says %v: error %.1e, limit %.1e", where(), got, want, relative, limit)
	}
}

// settle reports the misses since it was last called: how many, and the farthest.
func (y *yardstick) settle(t *testing.T) {
	t.Helper()
	if y.misses > 0 {
		t.Errorf("%s: %d numbers are off; %s", y.what, y.misses, y.worstMiss)
	}
	y.misses, y.farthest, y.worstMiss = 0, 0, ""
}

func (y *yardstick) log(t *testing.T) {
	t.Helper()
	t.Logf("%-17s %6d numbers, worst relative error %.1e (%s)", y.what, y.count-y.yielding-y.nothing, y.worst, y.at)
	if y.yielding > 0 {
		t.Logf("%-17s %6d where no 1e-9 can be asked for: at worst %.1e (%s); reached %.1e", "", y.yielding, y.most, y.mostAt, y.reached)
	}
	if y.nothing > 0 {
		t.Logf("%-17s %6d that are zero", "", y.nothing)
	}
}

// yardsticks is one for each quantity that is compared.
type yardsticks struct{ gain, amp, zin, volt, current, at yardstick }

func newYardsticks(of string) *yardsticks {
	return &yardsticks{
		gain:    yardstick{what: "gain" + of},
		amp:     yardstick{what: "amp gain" + of},
		zin:     yardstick{what: "input Z" + of},
		volt:    yardstick{what: "branch V" + of},
		current: yardstick{what: "branch I" + of},
		at:      yardstick{what: "At(s)" + of},
	}
}

func (y *yardsticks) each(do func(*yardstick)) {
	for _, x := range []*yardstick{&y.gain, &y.amp, &y.zin, &y.volt, &y.current, &y.at} {
		do(x)
	}
}

// TestAgainstReference solves random networks and compares every answer with testdata/reference.py, which forms other
// equations (branch currents as unknowns), solves them by LAPACK and refines them in extended precision.
//
// Networks with coupled coils have yardsticks of their own: the star-mesh form writes a mutual inductance as admittances
// that all but cancel, and at 1 Hz, where they are largest, the solver must see that and take its slow road.
//
// The agreement is asked for of every number by itself, however small it is beside others, with three exceptions: where
// the reference's extended precision is not enough, and the current of a wire and the voltage across an empty place, which
// are sums and differences of float64 numbers.
func TestAgainstReference(t *testing.T) {
	count := 180
	if testing.Short() {
		count = 36
	}
	networks := randomNetworks(1976, count)
	three, err := loadThreeWay()
	if err != nil {
		t.Fatal(err)
	}
	networks = append(networks, three)
	r := rand.New(rand.NewPCG(1976, 1<<32))
	var request jsonRequest
	for _, n := range networks {
		if k := len(n.netlist.Branches); k < 4 || k > 44 {
			t.Fatalf("%s: %d branches", n.name, k)
		}
		freqs := logSpaced(1, 100e3, 20)
		for i := 1; i < len(freqs)-1; i++ {
			freqs[i] *= 0.8 + 0.4*r.Float64()
		}
		var points []complex128
		for range 5 {
			// The right half of the s-plane, where a passive network has no pole.
			points = append(points, complex(10*math.Pow(1e4, r.Float64()), 1e5*r.NormFloat64()))
		}
		points = append(points, complex(3000, 0))
		request.Networks = append(request.Networks, n.toJSON(freqs, points))
	}
	reply := askReference(t, request)

	plain, coupled := newYardsticks(""), newYardsticks(", coupled")
	doubt, condition, withCoils := 0.0, 0.0, 0
	for i, n := range networks {
		freqs, want := request.Networks[i].FrequencyHz, &reply.Networks[i]
		doubt = max(doubt, want.Doubt, referenceError(n, freqs[i%len(freqs)], want.gainsAndZin(i%len(freqs))))
		y := plain
		if len(n.netlist.Couplings) > 0 {
			y = coupled
			withCoils++
		}
		c, err := circuit.Compile(&n.netlist, n.outs)
		if err != nil {
			t.Errorf("%s: %v", n.name, err)
			continue
		}
		var s *circuit.Sweep
		if i%2 == 0 {
			s, err = c.NewSweep(freqs)
		} else {
			s, err = movedSweep(n, freqs, r)
		}
		if err != nil {
			t.Errorf("%s: %v", n.name, err)
			continue
		}
		if err := s.Solve(); err != nil {
			t.Errorf("%s: %v", n.name, err)
			continue
		}
		got := make([]complex128, len(freqs))
		compare := func(y *yardstick, want []jsonComplex, noise func(f int) float64, item string) {
			for f := range freqs {
				y.compare(got[f], want[f].value(), noise(f), func() string {
					return fmt.Sprintf("%s%s at %.4g Hz", n.name, item, freqs[f])
				})
			}
		}
		for o, out := range n.outs {
			s.Gain(got, o)
			compare(&y.gain, want.Gain[o], func(f int) float64 {
				return 8 * reply.ExtendedEps * cancelling(want.NodeMagnitude, out.From, out.To, f, want.Gain[o][f])
			}, fmt.Sprintf(" output %d", o))
		}
		s.AmpGain(got)
		none := func(int) float64 { return 0 }
		compare(&y.amp, want.Amp, none, "")
		s.InputImpedance(got)
		compare(&y.zin, want.Zin, none, "")
		for k, b := range n.netlist.Branches {
			item := " " + b.Name
			noise := func(sense [][]float64) func(int) float64 {
				return func(f int) float64 {
					switch {
					case b.Kind == circuit.Resistor && b.Value == 0:
						// A wire carries what the other branches at its ends leave over: the solver adds those up, noise and all.
						return 8 * unit * meeting(&n.netlist, want, b, f) / cmplx.Abs(want.BranchCurrent[k][f].value())
					case b.Kind == circuit.Capacitor && b.Value == 0:
						// An empty place has no current to find its voltage from, only its two nodes.
						return 8 * unit * (sense[k][f] + cancelling(want.NodeMagnitude, b.From, b.To, f, want.BranchVoltage[k][f]))
					}
					return 8 * reply.ExtendedEps * cancelling(want.NodeMagnitude, b.From, b.To, f, want.BranchVoltage[k][f])
				}
			}
			if err := s.BranchVoltage(got, k); err != nil {
				t.Fatal(err)
			}
			compare(&y.volt, want.BranchVoltage[k], noise(want.BranchVoltageSense), item)
			if err := s.BranchCurrent(got, k); err != nil {
				t.Fatal(err)
			}
			compare(&y.current, want.BranchCurrent[k], noise(want.BranchCurrentSense), item)
		}
		for f := range freqs {
			condition = max(condition, want.Condition[f])
		}
		for p, sp := range request.Networks[i].S {
			point, err := c.At(complex(sp[0], sp[1]))
			if err != nil {
				t.Errorf("%s at s = %v: %v", n.name, sp, err)
				continue
			}
			where := func() string { return fmt.Sprintf("%s at s = %.4g rad/s", n.name, sp) }
			for o := range n.outs {
				y.at.compare(point.Gain[o], want.At.Gain[o][p].value(), 0, where)
			}
			y.at.compare(point.Amp, want.At.Amp[p].value(), 0, where)
			y.at.compare(point.Zin, want.At.Zin[p].value(), 0, where)
		}
		y.each(func(y *yardstick) { y.settle(t) })
	}
	if !(doubt <= 1e-11) {
		t.Errorf("the reference itself is only good to %.1e", doubt)
	}
	t.Logf("%d networks, %d with coupled coils; condition number of the reference's scaled equations up to %.0e, its gains and impedances good to %.0e",
		len(networks), withCoils, condition, doubt)
	plain.each(func(y *yardstick) { y.log(t) })
	coupled.each(func(y *yardstick) { y.log(t) })
}

// movedSweep compiles n with other values, solves it so that anything that can be kept is kept, and then sets n's own
// values and losses, as a tuner would.
func movedSweep(n *testNetwork, freqs []float64, r *rand.Rand) (*circuit.Sweep, error) {
	other := n.netlist
	other.Branches = append([]circuit.Branch(nil), n.netlist.Branches...)
	for k := range other.Branches {
		other.Branches[k].Value *= 0.3 + 2*r.Float64()
		other.Branches[k].Loss *= 0.3 + 2*r.Float64()
	}
	c, err := circuit.Compile(&other, n.outs)
	if err != nil {
		return nil, err
	}
	s, err := c.NewSweep(freqs)
	if err != nil {
		return nil, err
	}
	if err := s.Solve(); err != nil {
		return nil, err
	}
	for k, b := range n.netlist.Branches {
		if b.Value > 0 && b.Kind != circuit.Port {
			if err := s.SetValue(k, b.Value); err != nil {
				return nil, err
			}
		}
		if b.Loss > 0 {
			if err := s.SetLoss(k, b.Loss); err != nil {
				return nil, err
			}
		}
	}
	return s, nil
}

// referenceError is how far the reference's gains and input impedance at hz are from those of bigCircuit.
func referenceError(n *testNetwork, hz float64, reference []complex128) float64 {
	gains, zin := newBigCircuit(&n.netlist, n.outs).solve(2 * math.Pi * hz)
	worst := 0.0
	for q, x := range append(gains, zin) {
		worst = max(worst, cmplx.Abs(x.complex128()-reference[q])/cmplx.Abs(reference[q]))
	}
	return worst
}

// meeting is the sum of the moduli of all currents at both ends of wire, each times what may be magnified in it.
func meeting(n *circuit.Netlist, want *jsonSolution, wire circuit.Branch, f int) float64 {
	sum := 0.0
	for k, b := range n.Branches {
		if b.From == wire.From || b.From == wire.To || b.To == wire.From || b.To == wire.To {
			sum += cmplx.Abs(want.BranchCurrent[k][f].value()) * (1 + want.BranchCurrentSense[k][f])
		}
	}
	return sum
}

// cancelling is how many times larger the voltages of two nodes are than what lies between them: the digits that the
// reference loses, which holds node voltages in extended precision. The solver follows the voltages across parts instead.
func cancelling(nodes [][]float64, from, to, f int, between jsonComplex) float64 {
	return (nodes[from][f] + nodes[to][f]) / cmplx.Abs(between.value())
}
