package tune

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"testing"
	"time"

	"sixdown/xover/preferred"
)

func designFile(t testing.TB, path string) *Problem {
	t.Helper()
	src, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return problem(t, string(src))
}

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
					Kind: kindOf(p.vars[v].Kind), Value: r.Values[v] * math.Exp(random.NormFloat64()*0.3),
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
		all := &buyer{p: p, ctx: context.Background(), market: p.market(stock, coils, false), bestF: math.Inf(1), e: e, x: make([]float64, len(p.vars)), limit: math.Inf(-1)}
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

func TestBuyTimes(t *testing.T) {
	for _, f := range []string{"../../cmd/sixdown/internal/demo/harbour.toml", "../../audioio/testdata/breakwater.toml"} {
		p := designFile(t, f)
		r, err := p.Run(context.Background(), Search{})
		if err != nil {
			t.Fatal(err)
		}
		for _, s := range []preferred.Series{preferred.E6, preferred.E12, preferred.E24} {
			t0 := time.Now()
			b, err := p.Buy(context.Background(), r.Values, preferred.Shop{Series: s}, BuySettings{})
			if err != nil {
				t.Fatal(err)
			}
			t.Log(fmt.Sprintf("%s %s: ideal %.4f rounded %.4f bought %.4f nodes %d proved %t %v", f[len(f)-15:], s, r.After.Objective, b.Rounded.Objective, b.Score.Objective, b.Nodes, b.Proved, time.Since(t0)))
		}
	}
}
