package tune

import (
	"context"
	"maps"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
	"time"

	"sixdown/xover"
	"sixdown/xover/preferred"
)

// twoWay is an invented two-way of six parts; limit is more lines of its [tune].
func twoWay(limit string) string {
	return `[tune]
band = ["300 Hz", "15 kHz"]
` + limit + `
[parts]
L1 = { value = "0.9 mH", dcr = "0.4 ohm" }
C1 = "9 uF"
C2 = "5 uF"
L2 = { value = "0.4 mH", dcr = "0.3 ohm" }
R1 = "2.2 ohm"
R2 = "12 ohm"
[driver.w]
re = "5.9 ohm"
le = "0.5 mH"
sensitivity = "87 dB"
at = ["0 mm", "-80 mm", "-20 mm"]
[driver.t]
re = "5.1 ohm"
le = "0.04 mH"
fs = "900 Hz"
qms = 3
qes = 1.4
sensitivity = "90 dB"
at = ["0 mm", "60 mm", "0 mm"]
[[way]]
name = "low"
driver = "w"
target = ["low-pass linkwitz-riley 2 at 2.4 kHz"]
network = ["series L1", "shunt C1"]
[[way]]
name = "high"
driver = "t"
polarity = "reversed"
target = ["high-pass linkwitz-riley 2 at 2.4 kHz"]
network = ["series C2", "shunt L2", "series R1", "shunt R2"]
`
}

// enumerate tries every choice there is.
func enumerate(b *buyer) error {
	choice := make([]int, len(b.market.candidates))
	for {
		if _, err := b.try(choice); err != nil {
			return err
		}
		v := 0
		for ; v < len(choice); v++ {
			if choice[v]++; choice[v] < len(b.market.candidates[v]) {
				break
			}
			choice[v] = 0
		}
		if v == len(choice) {
			return nil
		}
	}
}

// What Buy finds is what trying everything finds: small shelves by lot, some with few of each and prices, with and without a limit
// on the impedance.
func TestBuyIsAsGoodAsEnumeration(t *testing.T) {
	trials := 12
	if testing.Short() {
		trials = 3
	}
	for trial := range trials {
		limit := `min_impedance = "2.5 ohm"`
		if trial%3 == 2 {
			limit = `min_impedance = "4.2 ohm"`
		}
		p := problem(t, twoWay(limit))
		r, err := p.Run(context.Background(), Search{})
		if err != nil {
			t.Fatal(err)
		}
		random := rand.New(rand.NewPCG(uint64(trial), 1))
		var items []preferred.Item
		for v := range p.vars {
			for range 3 {
				it := preferred.Item{
					Kind: KindOf(p.vars[v].Kind), Value: r.Values[v] * math.Exp(random.NormFloat64()*0.3),
					Tol: -1, DCR: -1, Price: 1 + float64(random.IntN(5)), Count: -1,
				}
				if it.Kind == preferred.Inductor && trial%2 == 0 {
					it.DCR = 0.3 * math.Pow(it.Value/0.5e-3, 0.6)
				}
				if trial%2 == 1 {
					it.Count = 1
				}
				items = append(items, it)
			}
		}
		stock := preferred.NewStock(items)
		got, err := p.Buy(context.Background(), r.Values, stock, BuySettings{})
		if err != nil {
			t.Fatal(err)
		}
		coils := p.windings(stock)
		e, err := p.newEvaluatorWith(coils)
		if err != nil {
			t.Fatal(err)
		}
		market, err := p.market(stock, coils, false)
		if err != nil {
			t.Fatal(err)
		}
		all := &buyer{p: p, ctx: context.Background(), market: market, bestF: math.Inf(1), e: e, x: make([]float64, len(p.vars)), limit: math.Inf(-1)}
		if p.limit > 0 {
			all.limit = math.Log(p.limit)
		}
		if err := enumerate(all); err != nil {
			t.Fatal(err)
		}
		if all.best == nil {
			if !got.Unmet {
				t.Errorf("shelf %d: no set holds the limit, and Buy says one does", trial)
			}
			continue
		}
		// Both compute the same sets with the same arithmetic.
		if got.Unmet || math.Abs(got.Score.Objective-all.bestF) > 1e-9*all.bestF {
			t.Errorf("shelf %d: Buy finds %.9g, enumeration %.9g (of %d nodes, proved %t)", trial, got.Score.Objective, all.bestF, got.Nodes, got.Proved)
		}
	}
}

// Over the ten problems: the set bought in E24 is never worse than the rounded optimum, and how much better it is.
func TestBuyingIsBetterThanRounding(t *testing.T) {
	if testing.Short() {
		t.Skip("short")
	}
	all := problemsIn(t)
	for _, name := range slices.Sorted(maps.Keys(all)) {
		p := all[name]
		r, err := p.Run(context.Background(), Search{})
		if err != nil {
			t.Fatal(err)
		}
		began := time.Now()
		b, err := p.Buy(context.Background(), r.Values, preferred.Shop{Series: preferred.E24}, BuySettings{})
		if err != nil {
			t.Fatal(err)
		}
		holds := "holds"
		if b.Rounded.MinImpedance < p.limit {
			holds = "breaks the limit"
		}
		t.Logf("%-8s %2d parts: ideal %8.4f, rounded %8.4f (%s), bought %8.4f, %5.1f %% better; %4d places, proved %-5t %5.2f s", name, len(p.vars), r.After.Objective,
			b.Rounded.Objective, holds, b.Score.Objective, 100*(1-b.Score.Objective/b.Rounded.Objective), b.Nodes, b.Proved, time.Since(began).Seconds())
		if p.limit > 0 && b.Score.MinImpedance < p.limit*(1-1e-9) {
			t.Errorf("%s: the set bought loads with %g ohm", name, b.Score.MinImpedance)
		}
		if holds == "holds" && b.Score.Objective > b.Rounded.Objective*(1+1e-12) {
			t.Errorf("%s: bought %g is worse than rounded %g", name, b.Score.Objective, b.Rounded.Objective)
		}
		for v, value := range b.Values {
			if near := preferred.E24.Nearest(value); near != value {
				t.Errorf("%s: %s is %g, which is not in E24", name, p.vars[v].Part, value)
			}
		}
	}
}

// A coil's resistance is the list's, or that of the same wire: R goes as L to the power 0.6, derived beside sameWire.
func TestCoilsHaveTheirResistance(t *testing.T) {
	p := problem(t, twoWay(""))
	v := slices.IndexFunc(p.vars, func(q Variable) bool { return q.Part == "L1" }) // 0.9 mH, 0.4 ohm
	for _, c := range []struct {
		name   string
		source Source
		value  float64
		want   float64
	}{
		{"same wire, same coil", preferred.Shop{Series: preferred.E24}, 0.9e-3, 0.4},
		{"same wire, twice the inductance", preferred.Shop{Series: preferred.E24}, 1.8e-3, 0.4 * math.Pow(2, 0.6)},
		{"a list", preferred.NewStock([]preferred.Item{{Kind: preferred.Inductor, Value: 1e-3, DCR: 0.2, Count: -1}, {Kind: preferred.Inductor, Value: 4e-3, DCR: 0.8, Count: -1}}), 2e-3, 0.4},
		{"one coil in the list", preferred.NewStock([]preferred.Item{{Kind: preferred.Inductor, Value: 1e-3, DCR: 0.2, Count: -1}}), 2e-3, 0.2 * math.Pow(2, 0.6)},
	} {
		coils := p.windings(c.source)
		if got := coils.ohm(v, math.Log(c.value)); math.Abs(got/c.want-1) > 1e-12 {
			t.Errorf("%s: %g ohm, want %g", c.name, got, c.want)
		}
		const h = 1e-5
		x := math.Log(c.value * 1.1)
		slope := (coils.ohm(v, x+h) - coils.ohm(v, x-h)) / (2 * h)
		if got := coils.slope(v, x); math.Abs(got/slope-1) > 1e-8 { // a central difference of an exponential: h²/6
			t.Errorf("%s: slope %g, want %g", c.name, got, slope)
		}
	}
}

// Two capacitors that make up what no single one has.
func TestPairsAreBought(t *testing.T) {
	text := `[parts]
L1 = "1.2732395447351628 mH"
C1 = "4.973591971621729 uF"
[driver.w]
impedance = "8 ohm"
[[way]]
name = "low"
driver = "w"
target = ["low-pass linkwitz-riley 2 at 2 kHz"]
network = ["series L1", "shunt C1"]
`
	p := problem(t, text)
	stock := preferred.NewStock([]preferred.Item{
		{Kind: preferred.Inductor, Value: 1.2732395447351628e-3, DCR: 1e-6, Tol: -1, Price: 3, Count: 1},
		{Kind: preferred.Capacitor, Value: 3e-6, DCR: -1, Tol: -1, Price: 2, Count: 1},
		{Kind: preferred.Capacitor, Value: 1.973591971621729e-6, DCR: -1, Tol: -1, Price: 1, Count: 1},
	})
	b, err := p.Buy(context.Background(), p.Start(), stock, BuySettings{Pairs: true})
	if err != nil {
		t.Fatal(err)
	}
	c := b.Choices[1]
	if b.Score.Objective > 1e-12 || len(c.Items) != 2 || !c.Parallel || b.Price != 6 || b.Values[1] < 4.97e-6 {
		t.Errorf("bought %+v for %g, objective %g", c, b.Price, b.Score.Objective)
	}
	alone, err := p.Buy(context.Background(), p.Start(), stock, BuySettings{})
	if err != nil {
		t.Fatal(err)
	}
	if alone.Values[1] != 3e-6 {
		t.Errorf("without pairs C1 is %g, want 3 uF, the nearer by ratio", alone.Values[1])
	}
}

// A shelf with too little for any set says of what; it sells nothing twice, and no set is then the best.
func TestShelfWithTooLittle(t *testing.T) {
	p := problem(t, twoWay(""))
	stock := readStock(t, "kind,value,count\nL,0.47 mH,9\nR,4.7 ohm,9\nC,6.8 uF,1\n")
	r, err := p.Run(context.Background(), Search{Starts: 20})
	if err != nil {
		t.Fatal(err)
	}
	b, err := p.Buy(context.Background(), r.Values, stock, BuySettings{})
	if err == nil || b != nil {
		t.Fatalf("bought %+v", b)
	}
	if want := "tune: the list has too few parts for any set that was tried: of 6.8 uF there are 1, and C1, C2 need 2; add some, or lower what is asked"; err.Error() != want {
		t.Errorf("got %q", err)
	}
}

// A limit that no set holds leaves the one that comes nearest, which is called neither met nor best.
func TestNoSetHoldsTheLimit(t *testing.T) {
	p := problem(t, twoWay(`min_impedance = "30 ohm"`))
	stock := readStock(t, "kind,value\nL,0.47 mH\nL,1 mH\nR,4.7 ohm\nR,10 ohm\nC,6.8 uF\nC,10 uF\n")
	b, err := p.Buy(context.Background(), p.Start(), stock, BuySettings{})
	if err != nil {
		t.Fatal(err)
	}
	if !b.Unmet || b.Proved {
		t.Errorf("unmet %t, proved %t", b.Unmet, b.Proved)
	}
}

// Interrupted at once, what is nearest to the optimum is bought.
func TestInterruptedPurchase(t *testing.T) {
	p := problem(t, twoWay(""))
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	b, err := p.Buy(ctx, p.Start(), preferred.Shop{Series: preferred.E12}, BuySettings{})
	if err != nil {
		t.Fatal(err)
	}
	if b.Status != Interrupted || b.Proved || len(b.Values) != 6 || b.Score != b.Rounded {
		t.Errorf("got %+v", b)
	}
}

// Coils that state no resistance have that of the same wire, two in series the sum and two alike side by side half of one's; of
// coils of one value with and without a core the winding's line has the mean in ln, √(0.15·0.9).
func TestResistanceOfPairs(t *testing.T) {
	p := problem(t, twoWay(""))
	coils := p.windings(readStock(t, "kind,value\nL,0.33 mH\n"))
	m, err := p.market(readStock(t, "kind,value\nL,0.33 mH\nC,1 uF\nR,1 ohm\n"), coils, true)
	if err != nil {
		t.Fatal(err)
	}
	one := 0.4 * math.Pow(0.33/0.9, 0.6) // of L1, 0.9 mH with 0.4 Ω: derived in winding.go
	found := 0
	for _, c := range m.candidates[0] {
		want := one
		switch {
		case c.pair == nil:
		case c.pair.Parallel:
			want = one / 2
		default:
			want = 2 * one
		}
		if found++; math.Abs(c.ohm/want-1) > 0.006 { // three figures of one, and of the whole
			t.Errorf("%g H: %g Ω, want %g", c.value, c.ohm, want)
		}
	}
	if found != 3 {
		t.Errorf("%d candidates", found)
	}
	twice := p.windings(readStock(t, "kind,value,dcr\nL,0.47 mH,0.15 ohm\nL,0.47 mH,0.9 ohm\nL,1 mH,0.5 ohm\n"))
	for _, mH := range []float64{0.1, 0.47, 0.6, 1, 2} {
		ohm := twice.ohm(0, math.Log(mH*1e-3))
		if !(ohm > 0) || math.IsInf(ohm, 1) || mH == 0.47 && math.Abs(ohm-math.Sqrt(0.15*0.9)) > 1e-12 {
			t.Errorf("%g mH: %g Ω", mH, ohm)
		}
	}
}

// A coil of which nobody states a resistance is no perfect one: 0.35 Ω for 1 mH.
func TestCoilOfUnstatedResistance(t *testing.T) {
	p := problem(t, strings.ReplaceAll(strings.ReplaceAll(twoWay(""), `, dcr = "0.4 ohm"`, ""), `, dcr = "0.3 ohm"`, ""))
	b, err := p.Buy(context.Background(), p.Start(), preferred.Shop{Series: preferred.E6}, BuySettings{Nodes: 10})
	if err != nil {
		t.Fatal(err)
	}
	for v, ohm := range b.Ohms {
		if p.vars[v].Kind != xover.Inductor {
			continue
		}
		if want := 0.35 * math.Pow(b.Values[v]/1e-3, 0.6); math.Abs(ohm/want-1) > 0.006 {
			t.Errorf("%s: %g Ω, want %g", p.vars[v].Part, ohm, want)
		}
	}
}

func readStock(t testing.TB, text string) *preferred.Stock {
	t.Helper()
	stock, err := preferred.ReadStock("stock.csv", strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	return stock
}

// Pairs of a whole catalogue would take all memory: refused, with what to do.
func TestTooManyForPairs(t *testing.T) {
	p := problem(t, twoWay(""))
	b, err := p.Buy(context.Background(), p.Start(), preferred.Shop{Series: preferred.E192}, BuySettings{Pairs: true})
	if err == nil || b != nil || !strings.Contains(err.Error(), "take a coarser series, or narrow its range") {
		t.Errorf("got %+v, %v", b, err)
	}
}

// Where phases count, sets are compared with them: the set bought is the best by Score of all there are.
func TestBuyCountsPhases(t *testing.T) {
	random := rand.New(rand.NewPCG(9, 9))
	p := problem(t, twoWay("weights = { sum = 1, ways = 1, phase = 1 }"))
	r, err := p.Run(context.Background(), Search{Starts: 40})
	if err != nil {
		t.Fatal(err)
	}
	for shelf := range 6 {
		var items []preferred.Item
		for v, q := range p.vars {
			for range 3 {
				items = append(items, preferred.Item{Kind: KindOf(q.Kind), Value: r.Values[v] * math.Exp(1.2*(random.Float64()-0.5)), Tol: -1, DCR: -1, Price: -1, Count: -1})
			}
		}
		stock := preferred.NewStock(items)
		b, err := p.Buy(context.Background(), r.Values, stock, BuySettings{})
		if err != nil {
			t.Fatal(err)
		}
		coils := p.windings(stock)
		m, err := p.market(stock, coils, false)
		if err != nil {
			t.Fatal(err)
		}
		all := &buyer{p: p, ctx: context.Background(), market: m}
		best := math.Inf(1)
		choice := make([]int, len(m.candidates))
		for done := false; !done; {
			s, err := all.score(choice)
			if err != nil {
				t.Fatal(err)
			}
			best = min(best, s.Objective)
			v := 0
			for ; v < len(choice); v++ {
				if choice[v]++; choice[v] < len(m.candidates[v]) {
					break
				}
				choice[v] = 0
			}
			done = v == len(choice)
			if testing.Short() && v > 3 {
				done = true
			}
		}
		if b.Score.Objective > best*(1+1e-9) {
			t.Errorf("shelf %d: bought %g dB², and there is a set of %g", shelf, b.Score.Objective, best)
		}
	}
}
