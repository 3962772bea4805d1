package tune

import (
	"context"
	"math"
	"math/rand/v2"
	"reflect"
	"slices"
	"testing"
)

// The Jacobian is that of the residuals: fourth-order central differences.
func TestJacobianIsThatOfTheResiduals(t *testing.T) {
	all := problemsIn(t)
	all["phase"] = problem(t, twoWay(`weights = { phase = 0.7 }`))
	for name, p := range all {
		e, err := p.newEvaluator()
		if err != nil {
			t.Fatal(err)
		}
		x, err := p.logs(p.Start())
		if err != nil {
			t.Fatal(err)
		}
		if _, err := e.objective(x); err != nil {
			t.Fatal(err)
		}
		e.setPairs()
		if _, err := e.derivatives(x); err != nil {
			t.Fatal(err)
		}
		jac := make([][]float64, len(x))
		for v := range x {
			jac[v] = slices.Clone(e.jac[v])
		}
		// The error of the difference is h⁴ times a fifth derivative over 30, and rounding over h: 1e-9 together.
		const h = 1e-3
		for v := range x {
			at := func(by float64) []float64 {
				y := slices.Clone(x)
				y[v] += by
				if _, err := e.objective(y); err != nil {
					t.Fatal(err)
				}
				return slices.Clone(e.resid)
			}
			r2, r1, l1, l2 := at(2*h), at(h), at(-h), at(-2*h)
			for k := range r1 {
				want := (8*(r1[k]-l1[k]) - (r2[k] - l2[k])) / (12 * h)
				if math.Abs(jac[v][k]-want) > 1e-7*(1+math.Abs(want)) {
					t.Fatalf("%s: residual %d by %s: %g, want %g", name, k, p.vars[v].Part, jac[v][k], want)
				}
			}
		}
	}
}

// With resistances that follow the coils' values, too.
func TestJacobianWithWindings(t *testing.T) {
	p := problem(t, twoWay(""))
	coils := make(windings, len(p.vars))
	for v := range coils {
		if p.vars[v].Part[0] == 'L' {
			coils[v] = &winding{[]float64{-8, -7}, []float64{-1, -0.4}}
		}
	}
	e, err := p.newEvaluatorWith(coils)
	if err != nil {
		t.Fatal(err)
	}
	x, _ := p.logs(p.Start())
	if _, err := e.derivatives(x); err != nil {
		t.Fatal(err)
	}
	jac := slices.Clone(e.jac[0]) // L1
	const h = 1e-4
	x[0] += h
	if _, err := e.objective(x); err != nil {
		t.Fatal(err)
	}
	up := slices.Clone(e.resid)
	x[0] -= 2 * h
	if _, err := e.objective(x); err != nil {
		t.Fatal(err)
	}
	for k := range up {
		if want := (up[k] - e.resid[k]) / (2 * h); math.Abs(jac[k]-want) > 1e-6*(1+math.Abs(want)) { // h² of a third derivative
			t.Fatalf("residual %d: %g, want %g", k, jac[k], want)
		}
	}
}

// The quadratic program against trying every set of active conditions.
func TestQuadraticAgainstEnumeration(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	solved, infeasible := 0, 0
	for trial := range 500 {
		n := 1 + random.IntN(4)
		m := random.IntN(6)
		half := make([]float64, n*n)
		for i := range half {
			half[i] = random.NormFloat64()
		}
		G, g := make([]float64, n*n), make([]float64, n)
		for i := range n {
			g[i] = random.NormFloat64()
			for j := range n {
				for k := range n {
					G[i*n+j] += half[i*n+k] * half[j*n+k]
				}
			}
			G[i*n+i] += 0.1
		}
		var conds []condition
		for range m {
			a := make([]float64, n)
			for i := range a {
				a[i] = random.NormFloat64()
			}
			conds = append(conds, condition{a, random.NormFloat64()})
		}
		want, ok := bySets(n, G, g, conds)
		q := newQuadratic(n)
		got := q.solve(G, g, conds)
		if got != ok {
			t.Fatalf("trial %d: solvable %t, want %t", trial, got, ok)
		}
		if !ok {
			infeasible++
			continue
		}
		solved++
		for i := range want {
			if math.Abs(q.d[i]-want[i]) > 1e-7*(1+norm(want)) { // the enumeration's Gaussian elimination
				t.Fatalf("trial %d: %v, want %v", trial, q.d, want)
			}
		}
	}
	if solved < 100 || infeasible < 5 {
		t.Errorf("%d solved and %d infeasible: the trials show too little", solved, infeasible)
	}
}

// Half g·d² under d ≥ 0.5 is least at 0.5, however small the curvature is beside 1.
func TestQuadraticAtAnyScale(t *testing.T) {
	for _, g := range []float64{1e6, 1, 1e-10, 1e-14, 1e-20} {
		q := newQuadratic(1)
		if !q.solve([]float64{g}, []float64{0}, []condition{{[]float64{1}, 0.5}}) || math.Abs(q.d[0]-0.5) > 1e-12 {
			t.Errorf("curvature %g: %v", g, q.d)
		}
	}
}

// bySets returns the least of ½dᵀGd + gᵀd over all sets of conditions taken as equations whose solution meets the others.
func bySets(n int, G, g []float64, conds []condition) (best []float64, ok bool) {
	least := math.Inf(1)
	for set := range 1 << len(conds) {
		var active []condition
		for i := range conds {
			if set>>i&1 == 1 {
				active = append(active, conds[i])
			}
		}
		if len(active) > n {
			continue
		}
		size := n + len(active)
		rows := make([][]float64, size)
		for i := range n {
			rows[i] = make([]float64, size+1)
			copy(rows[i], G[i*n:(i+1)*n])
			for k, c := range active {
				rows[i][n+k] = -c.a[i]
			}
			rows[i][size] = -g[i]
		}
		for k, c := range active {
			rows[n+k] = make([]float64, size+1)
			copy(rows[n+k], c.a)
			rows[n+k][size] = c.b
		}
		d := gauss(rows)
		if d == nil {
			continue
		}
		d = d[:n]
		met := true
		for _, c := range conds {
			met = met && dot(c.a, d) >= c.b-1e-9*(1+math.Abs(c.b))
		}
		value := dot(g, d)
		for i := range n {
			value += d[i] * dot(G[i*n:(i+1)*n], d) / 2
		}
		if met && value < least {
			least, best = value, d
		}
	}
	return best, best != nil
}

// gauss solves a system given as rows with the right side last; nil if it is singular.
func gauss(rows [][]float64) []float64 {
	n := len(rows)
	for c := range n {
		p := c
		for r := c; r < n; r++ {
			if math.Abs(rows[r][c]) > math.Abs(rows[p][c]) {
				p = r
			}
		}
		rows[c], rows[p] = rows[p], rows[c]
		if math.Abs(rows[c][c]) < 1e-12 {
			return nil
		}
		for r := range n {
			if f := rows[r][c] / rows[c][c]; r != c {
				for k := c; k <= n; k++ {
					rows[r][k] -= f * rows[c][k]
				}
			}
		}
	}
	x := make([]float64, n)
	for i := range x {
		x[i] = rows[i][n] / rows[i][i]
	}
	return x
}

func TestSameOnOneCoreAndTwo(t *testing.T) {
	p := problem(t, twoWay(`min_impedance = "4 ohm"`))
	run := func(workers int, seed uint64) *Result {
		r, err := p.Run(context.Background(), Search{Workers: workers, Seed: seed, Starts: 40})
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	one, two := run(1, 5), run(2, 5)
	if !reflect.DeepEqual(one, two) {
		t.Errorf("one goroutine %+v, two %+v", one, two)
	}
}

func TestInterruptedKeepsTheBest(t *testing.T) {
	p := problem(t, twoWay(""))
	ctx, cancel := context.WithCancel(context.Background())
	r, err := p.Run(ctx, Search{Workers: 1, Progress: func(done, _ float64) {
		if done > 0.05 {
			cancel()
		}
	}})
	if err != nil {
		t.Fatal(err)
	}
	if r.Status != Interrupted || r.After.Objective > r.Before.Objective {
		t.Errorf("status %d, objective %g from %g", r.Status, r.After.Objective, r.Before.Objective)
	}
	if _, err := p.Run(ctx, Search{}); err == nil {
		t.Error("a search that never began gives a result")
	}
}

// An impossible limit is said to be unmet, and what is reached is the load's own greatest: 8 Ω behind two coils of 15 mH at 20 Hz.
func TestUnmetLimit(t *testing.T) {
	text, _ := resistive("B3", func(int) float64 { return 1.2 })
	p := problem(t, "[tune]\nmin_impedance = \"50 ohm\"\n"+text)
	r, err := p.Run(context.Background(), Search{Starts: 10})
	if err != nil {
		t.Fatal(err)
	}
	if most := math.Hypot(8, 2*math.Pi*20*30e-3); !r.Unmet || r.After.MinImpedance > most*1.001 {
		t.Errorf("unmet %t, least impedance %g", r.Unmet, r.After.MinImpedance)
	}
}

// Held parts are no variables, followers move with their leader, and bounds are what the design says.
func TestVariables(t *testing.T) {
	p := problemsIn(t)["pilot"]
	var names []string
	for _, v := range p.Variables() {
		names = append(names, v.Part)
		switch v.Part {
		case "C1":
			if !slices.Equal(v.Followers, []string{"C2"}) || v.Low != 0.1e-6 || v.High != 470e-6 {
				t.Errorf("C1: %+v", v)
			}
		case "L2":
			if v.Low != 0.1e-3 || v.High != 0.6e-3 {
				t.Errorf("L2: %+v", v)
			}
		}
	}
	if !slices.Equal(names, []string{"C1", "L2", "C3", "L3", "C4", "R1"}) {
		t.Errorf("variables are %v; L1 is held and C2 follows", names)
	}
}

// A part across a source without resistance does nothing to any way; one of the ladder does.
func TestWorths(t *testing.T) {
	text, _ := resistive("B3", func(int) float64 { return 1 })
	text = "[parts]\nC99 = \"10 uF\"\n" + text[len("[parts]\n"):]
	p := problem(t, replaceOnce(t, text, `network = ["series`, `network = ["shunt C99", "series`))
	r, err := p.Run(context.Background(), Search{})
	if err != nil {
		t.Fatal(err)
	}
	all, err := p.Worths(r.Values)
	if err != nil {
		t.Fatal(err)
	}
	if w := all[0]; w.Part != "C99" || !w.Useless || !w.Open {
		t.Errorf("the least worth is %+v, want C99, useless, left open", w)
	}
	for _, w := range all[1:] {
		if w.Useless || !(w.Costs > 0.01) {
			t.Errorf("%+v: every rung of a third-order ladder matters", w)
		}
	}
}

func replaceOnce(t *testing.T, text, old, with string) string {
	t.Helper()
	i := indexOf(text, old)
	if i < 0 {
		t.Fatalf("%q is not in the design", old)
	}
	return text[:i] + with + text[i+len(old):]
}

func indexOf(text, of string) int {
	for i := 0; i+len(of) <= len(text); i++ {
		if text[i:i+len(of)] == of {
			return i
		}
	}
	return -1
}

// A coil before a resistor, doubled: by hand the level falls by 10·lg((1 + 4u²)/(1 + u²)), u the frequency over the corner, most
// in the highest octave, towards 6 dB.
func TestExplain(t *testing.T) {
	p := problem(t, `[tune]
band = ["1 kHz", "16 kHz"]
[parts]
L1 = "1.2732395447351628 mH"
[driver.w]
impedance = "8 ohm"
[[way]]
name = "low"
driver = "w"
target = ["low-pass butterworth 1 at 1 kHz"]
network = ["series L1"]
`)
	x, err := p.Explain([]float64{2.5464790894703255e-3}, []float64{1.2732395447351628e-3}, nil)
	if err != nil {
		t.Fatal(err)
	}
	c := x.Changes[0]
	want, n := 0.0, 0
	for _, f := range p.freqs {
		if u := f / 1000; f > 7999 {
			want += 10 * math.Log10((1+4*u*u)/(1+u*u))
			n++
		}
	}
	want /= float64(n)
	if c.Part != "L1" || c.Way != "low" || math.Abs(c.DB-want) > 1e-9 || c.To < 15999 || math.Abs(c.From-8000) > 1 {
		t.Errorf("got %+v, want %+.4f dB from 8 to 16 kHz", c, want)
	}
	if !(c.Costs > 0) {
		t.Errorf("undoing it costs %g", c.Costs)
	}
	for _, o := range x.Octaves {
		if o.After > 1e-9 || o.Before <= 0 {
			t.Errorf("%+v: after is exact, before is not", o)
		}
	}
}

// A network made for a third of the impedance, each part within a tenth of it, was scaled; one with a part moved alone was not.
func TestScaledTogether(t *testing.T) {
	p := problem(t, twoWay(""))
	before := p.Start()
	after := append([]float64(nil), before...)
	for v, q := range p.vars {
		switch q.Part {
		case "C2":
			after[v] *= 3.2
		case "L2", "R1", "R2":
			after[v] /= 2.8
		}
	}
	x, err := p.Explain(before, after, nil)
	if err != nil {
		t.Fatal(err)
	}
	// The mean in ln of 1/3.2 and three of 1/2.8.
	if want := math.Pow(1/(3.2*2.8*2.8*2.8), 0.25); len(x.Scaled) != 1 || x.Scaled[0].Way != "high" || math.Abs(x.Scaled[0].Factor-want) > 1e-12 {
		t.Errorf("scaled %+v, want high by %g", x.Scaled, want)
	}
}
