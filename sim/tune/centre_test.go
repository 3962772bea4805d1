package tune

import (
	"context"
	"maps"
	"slices"
	"testing"
)

// Of the ten problems at least three gain five points of yield or more; the others are reported as they are.
func TestCentringRaisesTheYield(t *testing.T) {
	if testing.Short() {
		t.Skip("short")
	}
	all := problemsIn(t)
	raised := 0
	for _, name := range slices.Sorted(maps.Keys(all)) {
		p := all[name]
		r, err := p.Run(context.Background(), Search{})
		if err != nil {
			t.Fatal(err)
		}
		c, err := p.Centre(context.Background(), r.Values, CentreSettings{})
		if err != nil {
			t.Fatal(err)
		}
		gain := 100 * (c.After - c.Before)
		t.Logf("%-8s yield %5.1f %% -> %5.1f %% (%+.1f points, sigma %.1f); objective %.3f -> %.3f", name, 100*c.Before, 100*c.After, gain, 100*c.Sigma, r.After.Objective, c.Score.Objective)
		if gain >= 5 {
			raised++
		}
		if c.After < c.Before || c.Score.Objective > 1.5*r.After.Objective*(1+1e-9) {
			t.Errorf("%s: centring makes it worse", name)
		}
	}
	if raised < 3 {
		t.Errorf("%d problems gain five points or more, want 3", raised)
	}
}
