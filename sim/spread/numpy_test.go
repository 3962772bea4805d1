package spread

import (
	"bytes"
	"context"
	"encoding/json"
	"math"
	"os"
	"os/exec"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"sixdown/sim/circuit"
)

type pyBranch struct {
	Kind string       `json:"kind"`
	From int          `json:"from"`
	To   int          `json:"to"`
	Loss float64      `json:"loss"`
	Z    [][2]float64 `json:"z"`
}

type pyBuilds struct {
	Freqs    []float64      `json:"freqs"`
	Source   float64        `json:"source"`
	Nodes    int            `json:"nodes"`
	Branches []pyBranch     `json:"branches"`
	Outputs  [][2]int       `json:"outputs"`
	Press    [][][2]float64 `json:"press"`
	Values   [][]float64    `json:"values"`
}

func pairs(z []complex128) [][2]float64 {
	out := make([][2]float64, len(z))
	for i, v := range z {
		out[i] = [2]float64{real(v), imag(v)}
	}
	return out
}

// forPython writes down the first so many builds of a design.
func forPython(p *Problem, freqs []float64, builds int, seed uint64) pyBuilds {
	net := p.sys.Netlist()
	q := pyBuilds{Freqs: freqs, Source: net.Source, Nodes: net.Nodes}
	for _, b := range net.Branches {
		pb := pyBranch{Kind: [...]string{"R", "L", "C", "Z"}[b.Kind], From: b.From, To: b.To, Loss: b.Loss}
		if b.Kind == circuit.Port {
			z := make([]complex128, len(freqs))
			for i, f := range freqs {
				z[i] = b.Port.Impedance(complex(0, 2*math.Pi*f))
			}
			pb.Z = pairs(z)
		}
		q.Branches = append(q.Branches, pb)
	}
	for i, o := range p.sys.Outputs() {
		q.Outputs = append(q.Outputs, [2]int{o.From, o.To})
		press := make([]complex128, len(freqs))
		p.sys.Pressures(press, i, freqs)
		q.Press = append(q.Press, pairs(press))
	}
	sampler, factors := NewSampler(len(p.parts), seed), make([]float64, len(p.parts))
	for i := range builds {
		p.Factors(factors, sampler, i)
		values := make([]float64, len(net.Branches))
		for b := range values {
			values[b] = net.Branches[b].Value
		}
		for k, part := range p.parts {
			for j, b := range part.branches {
				values[b] = part.nominal[j] * factors[k]
			}
		}
		q.Values = append(q.Values, values)
	}
	return q
}

func python(t *testing.T, in pyBuilds, args ...string) []byte {
	t.Helper()
	exe := "/usr/bin/python3" // Debian's, which has numpy
	if exec.Command(exe, "-c", "import numpy").Run() != nil {
		exe = "python3"
		if exec.Command(exe, "-c", "import numpy").Run() != nil {
			if os.Getenv("CI") != "" {
				t.Fatal("python3 with numpy is missing; CI must have it")
			}
			t.Skip("python3 with numpy is missing; apt-get install python3-scipy")
		}
	}
	text, err := json.Marshal(in)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(exe, append([]string{"../../testdata/spread.py"}, args...)...)
	cmd.Stdin = bytes.NewReader(text)
	var stderr strings.Builder
	cmd.Stderr = &stderr
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("spread.py: %v\n%s", err, stderr.String())
	}
	return out
}

// The three-way's fan is that of numpy's solve of the same builds.
func TestFanAgreesWithNumPy(t *testing.T) {
	p := file(t, "../../audioio/testdata/breakwater.toml")
	const builds = 200
	r, err := p.Run(context.Background(), Settings{Samples: builds, PerOctave: 2})
	if err != nil {
		t.Fatal(err)
	}
	var levels [][]float64
	if err := json.Unmarshal(python(t, forPython(p, r.Freqs, builds, 0)), &levels); err != nil {
		t.Fatal(err)
	}
	for k := range r.Freqs {
		column := make([]float64, builds)
		for i := range column {
			column[i] = levels[i][k]
		}
		slices.Sort(column)
		for _, q := range []struct{ p, got float64 }{{0.05, r.Sum.P05[k]}, {0.5, r.Sum.P50[k]}, {0.95, r.Sum.P95[k]}} {
			// Powers are kept as float32: 3e-7 dB.
			if want := quantile(builds, func(i int) float64 { return column[i] }, q.p); math.Abs(q.got-want) > 1e-6 {
				t.Errorf("%g Hz: the %g-quantile is %.6f dB, numpy has %.6f", r.Freqs[k], q.p, q.got, want)
			}
		}
	}
}

// How long numpy takes for as many builds, beside Run, is logged; it decides nothing. SIXDOWN_TIME=1 runs it.
func TestTimeBesideNumPy(t *testing.T) {
	if os.Getenv("SIXDOWN_TIME") == "" {
		t.Skip("SIXDOWN_TIME is not set")
	}
	p := file(t, "../../audioio/testdata/breakwater.toml")
	s := Settings{}
	if err := s.complete(p); err != nil {
		t.Fatal(err)
	}
	freqs, _, _ := p.grid(&s)
	const builds = 1000
	seconds, err := strconv.ParseFloat(strings.TrimSpace(string(python(t, forPython(p, freqs, builds, 0), "--time"))), 64)
	if err != nil {
		t.Fatal(err)
	}
	numpy := seconds * 20000 / builds
	for _, workers := range []int{1, 2} {
		began := time.Now()
		if _, err := p.Run(context.Background(), Settings{Workers: workers}); err != nil {
			t.Fatal(err)
		}
		own := time.Since(began).Seconds()
		t.Logf("20,000 builds at %d frequencies on %d goroutines: %.2f s with their quantiles; numpy %.0f s: %.0f times", len(freqs), workers, own, numpy, numpy/own)
	}
}

// A Judge passes the share of builds that Run says passes.
func TestJudgeAgreesWithRun(t *testing.T) {
	for _, about := range []bool{false, true} {
		p := file(t, "../../audioio/testdata/breakwater.toml")
		p.design.Spread.AboutLevel = about
		p.design.Spread.LimitDB = 0.8
		if about {
			p.design.Spread.LimitDB = 3.1
		}
		band := p.Band()
		r, err := p.Run(context.Background(), Settings{Samples: 2000, From: band[0], To: band[1]})
		if err != nil {
			t.Fatal(err)
		}
		j, err := p.NewJudge(12)
		if err != nil {
			t.Fatal(err)
		}
		if err := j.Settle(); err != nil {
			t.Fatal(err)
		}
		sampler, factors, pass := NewSampler(j.Dimensions(), 0), make([]float64, j.Dimensions()), 0
		for i := range 2000 {
			j.Factors(factors, sampler, i)
			off, _, err := j.Off(factors)
			if err != nil {
				t.Fatal(err)
			}
			if math.Abs(off) <= p.design.Spread.LimitDB {
				pass++
			}
		}
		// The same builds; a power kept as float32 may decide one otherwise.
		if got := float64(pass) / 2000; math.Abs(got-r.Yield) > 1.1/2000 || !(got > 0.05 && got < 0.995) {
			t.Errorf("about level %t: a Judge passes %g, Run %g", about, got, r.Yield)
		}
	}
}

// A Judge's gradient is that of Off: central differences by each part's nominal value, what builds are judged by moving with it, in all
// three ways of judging.
func TestOffGradient(t *testing.T) {
	for _, way := range []string{"about the nominal sum", "about a free level", "about a given level"} {
		p := file(t, "../../audioio/testdata/breakwater.toml")
		p.design.Spread.AboutLevel = way != "about the nominal sum"
		p.design.Tune.HasLevel, p.design.Tune.Level = way == "about a given level", 87
		j, err := p.NewJudge(12)
		if err != nil {
			t.Fatal(err)
		}
		var names []string
		for _, part := range p.parts {
			names = append(names, part.Name)
		}
		if err := j.SettleGradient(names); err != nil {
			t.Fatal(err)
		}
		net := p.sys.Netlist()
		sampler, factors := NewSampler(j.Dimensions(), 3), make([]float64, j.Dimensions())
		j.Factors(factors, sampler, 5)
		slope := make([]float64, len(names))
		if _, _, err := j.OffGradient(slope, factors); err != nil {
			t.Fatal(err)
		}
		if n := testing.AllocsPerRun(3, func() {
			if _, _, err := j.OffGradient(slope, factors); err != nil {
				t.Fatal(err)
			}
		}); n > 0 {
			t.Errorf("%g allocations a gradient", n)
		}
		const h = 1e-5
		for i, name := range names {
			value := net.Branches[p.sys.PartBranches(name)[0]].Value
			at := func(by float64) float64 {
				if err := j.Nominal(name, value*math.Exp(by)); err != nil {
					t.Fatal(err)
				}
				if err := j.Settle(); err != nil {
					t.Fatal(err)
				}
				off, _, err := j.Off(factors)
				if err != nil {
					t.Fatal(err)
				}
				return off
			}
			want := (at(h) - at(-h)) / (2 * h)
			at(0)
			if math.Abs(slope[i]-want) > 1e-6*(1+math.Abs(want)) { // h² of a third derivative, and rounding over h
				t.Errorf("%s: %s: %g dB, want %g", way, name, slope[i], want)
			}
		}
	}
}
