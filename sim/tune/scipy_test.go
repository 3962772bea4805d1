package tune

import (
	"bytes"
	"context"
	"encoding/json"
	"maps"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"slices"
	"strings"
	"testing"
	"time"

	"sixdown/sim/circuit"
	"sixdown/xover"
)

// record is what scipy found. To make it anew: SIXDOWN_RECORD=1 go test -run Record ./sim/tune.
const record = "../../testdata/tune/reference.json"

// The JSON of testdata/tune.py.
type (
	pyBranch struct {
		Kind  string       `json:"kind"`
		From  int          `json:"from"`
		To    int          `json:"to"`
		Value float64      `json:"value"`
		Loss  float64      `json:"loss"`
		Z     [][2]float64 `json:"z"`
		ZLoad [][2]float64 `json:"zload"`
	}
	pyTarget struct {
		High  bool    `json:"high"`
		Shape string  `json:"shape"`
		Order int     `json:"order"`
		Hz    float64 `json:"hz"`
	}
	pyVar struct {
		Branches []int   `json:"branches"`
		Low      float64 `json:"low"`
		High     float64 `json:"high"`
		Start    float64 `json:"start"`
	}
	pyProblem struct {
		Name     string             `json:"name"`
		Freqs    []float64          `json:"freqs"`
		Band     [2]float64         `json:"band"`
		Source   float64            `json:"source"`
		Nodes    int                `json:"nodes"`
		Branches []pyBranch         `json:"branches"`
		Outputs  [][2]int           `json:"outputs"`
		Press    [][][][2]float64   `json:"press"`
		Targets  [][]pyTarget       `json:"targets"`
		Tilt     float64            `json:"tilt"`
		Weights  map[string]float64 `json:"weights"`
		Level    *float64           `json:"level"`
		Vars     []pyVar            `json:"vars"`
		Limit    float64            `json:"limit"`
		Loads    []float64          `json:"loads"`
		Values   [][]float64        `json:"values"`
		Restarts int                `json:"restarts"`
		Seed     int                `json:"seed"`
	}
	pyScore struct {
		Objective float64  `json:"objective"`
		Level     float64  `json:"level"`
		SumRMS    *float64 `json:"sum_rms"`
		WayRMS    *float64 `json:"way_rms"`
		PhaseRMS  *float64 `json:"phase_rms"`
		LeastOhm  float64  `json:"least_ohm"`
	}
	pyBest struct {
		Name       string    `json:"name"`
		Objective  float64   `json:"objective"`
		Values     []float64 `json:"values"`
		Seconds    float64   `json:"seconds"`
		Starts     int       `json:"starts"`
		Within     int       `json:"within_1_percent"` // how many starts lead as far, to 1 %
		BrokeLimit int       `json:"broke_limit"`
	}
	pyAnswers[T any] struct {
		With    string `json:"with"`
		Answers []T    `json:"answers"`
	}
	pyScores struct {
		Name   string    `json:"name"`
		Scores []pyScore `json:"scores"`
	}
)

func pairsOf(z []complex128) [][2]float64 {
	out := make([][2]float64, len(z))
	for i, v := range z {
		out[i] = [2]float64{real(v), imag(v)}
	}
	return out
}

// forPython writes a problem down: what the drivers are, where the ear is and what is wanted, but nothing of how it is
// solved. The load is to be looked at over loads, in Hz.
func forPython(t testing.TB, name string, p *Problem, loads []float64) pyProblem {
	t.Helper()
	if p.design.Tune.CurveFile != "" {
		t.Fatal("tune.py knows no curves")
	}
	net := p.sys.Netlist()
	w := p.design.Tune.Weights
	q := pyProblem{
		Name: name, Freqs: p.freqs, Band: [2]float64{p.freqs[0], p.freqs[len(p.freqs)-1]}, Source: net.Source, Nodes: net.Nodes, Limit: p.limit, Loads: loads,
		Tilt:    p.design.Tune.Tilt,
		Weights: map[string]float64{"sum": w.Sum, "ways": w.Ways, "phase": w.Phase, "angles": w.Angles},
	}
	if p.fixed {
		q.Level = &p.level
	}
	for _, b := range net.Branches {
		pb := pyBranch{Kind: [...]string{"R", "L", "C", "Z"}[b.Kind], From: b.From, To: b.To, Value: b.Value, Loss: b.Loss}
		if b.Kind == circuit.Port {
			z := func(freqs []float64) [][2]float64 {
				out := make([]complex128, len(freqs))
				for i, f := range freqs {
					out[i] = b.Port.Impedance(complex(0, 2*math.Pi*f))
				}
				return pairsOf(out)
			}
			pb.Z, pb.ZLoad = z(q.Freqs), z(q.Loads)
		}
		q.Branches = append(q.Branches, pb)
	}
	for _, o := range p.sys.Outputs() {
		q.Outputs = append(q.Outputs, [2]int{o.From, o.To})
	}
	for _, e := range p.ears {
		var ways [][][2]float64
		for _, press := range e.press {
			ways = append(ways, pairsOf(press))
		}
		if ways != nil {
			q.Press = append(q.Press, ways)
		}
	}
	for _, way := range p.design.Ways {
		ts := []pyTarget{}
		for _, t := range way.Targets {
			ts = append(ts, pyTarget{t.HighPass, t.Shape, t.Order, t.Frequency})
		}
		q.Targets = append(q.Targets, ts)
	}
	for v := range p.vars {
		q.Vars = append(q.Vars, pyVar{p.branches[v], p.vars[v].Low, p.vars[v].High, p.vars[v].Value})
	}
	return q
}

// limitedLoads are where scipy holds the limit on the impedance, if there is one: not between these points, as the search does.
func limitedLoads(p *Problem) []float64 {
	if p.limit == 0 {
		return nil
	}
	return logGrid(20, 20e3, 24)
}

// python runs testdata/tune.py on one core.
func python[T any](t testing.TB, task string, problems []pyProblem) pyAnswers[T] {
	t.Helper()
	exe := "/usr/bin/python3" // Debian's, which has scipy
	if exec.Command(exe, "-c", "import scipy").Run() != nil {
		exe = "python3"
		if exec.Command(exe, "-c", "import scipy").Run() != nil {
			if os.Getenv("CI") != "" {
				t.Fatal("python3 with scipy is missing; CI must have it")
			}
			t.Skip("python3 with scipy is missing; apt-get install python3-scipy")
		}
	}
	in, err := json.Marshal(problems)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(exe, "../../testdata/tune.py", task)
	cmd.Env = append(os.Environ(), "OPENBLAS_NUM_THREADS=1", "OMP_NUM_THREADS=1", "MKL_NUM_THREADS=1")
	cmd.Stdin = bytes.NewReader(in)
	var stderr strings.Builder
	cmd.Stderr = &stderr
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("tune.py: %v\n%s", err, stderr.String())
	}
	var answers pyAnswers[T]
	if err := json.Unmarshal(out, &answers); err != nil {
		t.Fatal(err)
	}
	return answers
}

// recorded reads reference.json, by problem.
func recorded(t testing.TB) map[string]pyBest {
	t.Helper()
	src, err := os.ReadFile(record)
	if err != nil {
		t.Fatal(err)
	}
	var answers pyAnswers[pyBest]
	if err := json.Unmarshal(src, &answers); err != nil {
		t.Fatal(err)
	}
	best := map[string]pyBest{}
	for _, a := range answers.Answers {
		best[a.Name] = a
	}
	return best
}

// A score is what numpy makes of its definition, at values far from any optimum and at ours. Besides the ten problems there are
// some with a weight for the phase between ways, and one without sound.
func TestScoreAgreesWithNumPy(t *testing.T) {
	all := problemsIn(t)
	for _, name := range []string{"skerry", "lantern", "capstan"} {
		all[name+" in phase"] = problemFrom(t, name, func(d *xover.Design) { d.Tune.Weights.Phase = 0.7 })
	}
	gains, _ := resistive("LR4", func(int) float64 { return 1 })
	all["gains"] = problem(t, gains)
	random := rand.New(rand.NewPCG(1, 2))
	var ask []pyProblem
	for _, name := range slices.Sorted(maps.Keys(all)) {
		p := all[name]
		q := forPython(t, name, p, logGrid(20, 20e3, 300))
		r, err := p.Run(context.Background(), Search{Starts: 2})
		if err != nil {
			t.Fatal(err)
		}
		if name != "gains" { // an objective of 0 has no digits to compare
			q.Values = append(q.Values, r.Values)
		}
		for range 5 {
			values := p.Start()
			for v := range values {
				values[v] *= math.Exp(random.NormFloat64())
			}
			q.Values = append(q.Values, values)
		}
		ask = append(ask, q)
	}
	for i, a := range python[pyScores](t, "evaluate", ask).Answers {
		p := all[a.Name]
		for k, want := range a.Scores {
			s, err := p.Score(ask[i].Values[k])
			if err != nil {
				t.Fatal(err)
			}
			same := func(what string, got float64, want *float64, tolerance float64) {
				if want == nil {
					if !math.IsNaN(got) {
						t.Errorf("%s: %s is %.12g, numpy has none", a.Name, what, got)
					}
				} else if !(math.Abs(got-*want) <= tolerance*math.Abs(*want)) {
					t.Errorf("%s: %s %.12g, numpy has %.12g", a.Name, what, got, *want)
				}
			}
			// Levels lose up to six digits between ways that nearly cancel, in either program.
			same("objective", s.Objective, &want.Objective, 1e-9)
			same("level", s.LevelDB, &want.Level, 1e-9)
			same("sum", s.SumRMSDB, want.SumRMS, 1e-9)
			same("ways", s.WayRMSDB, want.WayRMS, 1e-9)
			same("phase", s.PhaseRMSDeg, want.PhaseRMS, 1e-9)
			// Numpy's least is that of a parabola through three points of a grid, 300 an octave. At a dip of a Q of 25 that leaves
			// 5e-5, and at 1500 an octave 2e-6, which takes numpy too long for every day.
			same("impedance", s.MinImpedance, &want.LeastOhm, 1e-4)
		}
	}
}

// SIXDOWN_RECORD writes reference.json: scipy's best from the design and 50 random places.
func TestRecord(t *testing.T) {
	if os.Getenv("SIXDOWN_RECORD") == "" {
		t.Skip("SIXDOWN_RECORD is not set; the record stands")
	}
	all := problemsIn(t)
	var ask []pyProblem
	for _, name := range slices.Sorted(maps.Keys(all)) {
		q := forPython(t, name, all[name], limitedLoads(all[name]))
		q.Restarts, q.Seed = 50, 1
		ask = append(ask, q)
	}
	out, err := json.MarshalIndent(python[pyBest](t, "optimise", ask), "", " ")
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(record, append(out, '\n'), 0o644); err != nil {
		t.Fatal(err)
	}
}

// In each of the ten problems the objective is within 1 % of the best that scipy found from the design and 50 random places
// (reference.json, made by testdata/tune.py): least_squares, and SLSQP where the impedance is limited.
//
// That is so with the default seed. A search may miss: of the seeds 1 to 20, one misses by more than 1 % on skerry, none on the
// others. Of 14 problems by lot that this search was not chosen on, with 5 to 20 parts, it misses the best ever found of two, with
// 17 and 19 parts, at every other seed.
func TestTenProblemsAgainstSciPy(t *testing.T) {
	best, all := recorded(t), problemsIn(t)
	if len(best) != len(all) {
		t.Fatalf("%d of %d problems are in the record", len(best), len(all))
	}
	for _, name := range slices.Sorted(maps.Keys(all)) {
		p, b := all[name], best[name]
		// The record is of this problem.
		s, err := p.Score(b.Values)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if math.Abs(s.Objective/b.Objective-1) > 1e-8 {
			t.Errorf("%s: the recorded values have the objective %.10g, the record says %.10g", name, s.Objective, b.Objective)
		}
		began := time.Now()
		r, err := p.Run(context.Background(), Search{Workers: 1})
		if err != nil {
			t.Fatal(err)
		}
		took := time.Since(began).Seconds()
		t.Logf("%-8s %2d parts: %10.6f, scipy %10.6f (%+.3f %%; %2d of %d starts lead there), %5.2f s on one core, scipy %5.1f s (%.0f times)", name, len(p.vars), r.After.Objective, b.Objective,
			100*(r.After.Objective/b.Objective-1), b.Within, b.Starts, took, b.Seconds, b.Seconds/took)
		if r.After.Objective > 1.01*b.Objective {
			t.Errorf("%s: objective %.6g, scipy has %.6g", name, r.After.Objective, b.Objective)
		}
		if p.limit > 0 && r.After.MinImpedance < p.limit*(1-1e-9) {
			t.Errorf("%s: the load falls to %.9g ohm, below %g", name, r.After.MinImpedance, p.limit)
		}
	}
}

// Here and now, too, scipy finds nothing better: not from where our search ends, and on two problems not from the design and
// some random places. And where its record ends it still stays.
func TestSciPyFindsNothingBetter(t *testing.T) {
	if testing.Short() {
		t.Skip("short")
	}
	best, all := recorded(t), problemsIn(t)
	var ask []pyProblem
	var want []float64 // not to be undercut
	for _, name := range slices.Sorted(maps.Keys(all)) {
		p := all[name]
		r, err := p.Run(context.Background(), Search{})
		if err != nil {
			t.Fatal(err)
		}
		// A builder would not hear a millionth. Where the load is limited, scipy's may fall lower between two points of its
		// grid: by ½(h/2)² times a curvature of ln |Z| of some units, h = ln 2/24, thus by 1e-4 or so of the objective.
		tolerance := 1e-6
		if p.limit > 0 {
			tolerance = 1e-3
		}
		q := forPython(t, name, p, limitedLoads(p))
		q.Values = [][]float64{r.Values}
		ask, want = append(ask, q), append(want, r.After.Objective*(1-tolerance))
		q.Values = [][]float64{best[name].Values}
		ask, want = append(ask, q), append(want, best[name].Objective*(1-1e-4)) // least_squares ends at 1e-8 of progress a step, where that is slow
		if name == "pilot" || name == "mooring" {
			q.Values, q.Restarts, q.Seed = nil, 4, 7
			ask, want = append(ask, q), append(want, r.After.Objective/1.01)
		}
	}
	for i, a := range python[pyBest](t, "optimise", ask).Answers {
		if a.Objective < want[i] {
			t.Errorf("%s from %d places: scipy has %.9g, below %.9g", a.Name, a.Starts, a.Objective, want[i])
		}
	}
}
