package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"sync"
	"testing"

	"sixdown/sim/circuit"
	"sixdown/sim/driver"
	"sixdown/xover"
)

// sheetTable writes a data-sheet driver's impedance as a table of n rows from 10 Hz to 40 kHz.
func sheetTable(d driver.DataSheet, n int) string {
	var b strings.Builder
	for i := range n {
		f := 10 * math.Pow(4000, float64(i)/float64(n-1))
		z := d.Impedance(complex(0, 2*math.Pi*f))
		fmt.Fprintf(&b, "%.12g %.12g %.12g\n", f, cmplx.Abs(z), cmplx.Phase(z)*180/math.Pi)
	}
	return b.String()
}

// A design of one low-pass on a driver that is known by a table alone, twice: the table's driver and its circuit are
// the same thing in the time domain as the data sheet that the table was made of.
func TestTableInTheTimeDomain(t *testing.T) {
	sheet := driver.DataSheet{Re: 5.6, Le: 0.7e-3, Fs: 35, Qms: 3.5, Qes: 0.4}
	d := &xover.Design{
		Parts:   []xover.Part{coil("L1", 1e-3, 0.3), capacitor("C1", 10e-6, 0)},
		Drivers: []xover.Driver{{Name: "woofer", ImpedanceFile: "w.zma"}},
		Ways:    []xover.Way{{Name: "low", Driver: "woofer", Network: []xover.Step{series(leaf("L1")), shunt(leaf("C1"))}}},
	}
	sys, err := New(d, files(map[string]string{"w.zma": sheetTable(sheet, 300)}))
	if err != nil {
		t.Fatal(err)
	}
	var wg sync.WaitGroup // the race detector looks on
	for range 4 {
		wg.Go(func() { sys.Fits() })
	}
	wg.Wait()
	fits := sys.Fits()
	if len(fits) != 1 || fits[0].Driver != "woofer" || fits[0].File != "w.zma" {
		t.Fatalf("got %+v", fits)
	}
	// No noise: twelve figures were written.
	near(t, "Re", fits[0].Fit.Re.Value, 5.6, 1e-6)
	near(t, "fs", fits[0].Fit.Fs.Value, 35, 1e-5)
	near(t, "Qts", fits[0].Fit.Qts.Value, 3.5*0.4/3.9, 1e-6)

	ss, err := circuit.NewStateSpace(sys.Netlist(), sys.Outputs())
	if err != nil {
		t.Fatal(err)
	}
	fitted, err := circuit.Compile(sys.FittedNetlist(), sys.Outputs())
	if err != nil {
		t.Fatal(err)
	}
	d.Drivers = []xover.Driver{{Name: "woofer", Re: 5.6, Le: 0.7e-3, Fs: 35, Qms: 3.5, Qes: 0.4}}
	same := mustNew(t, d)
	gain := make([]complex128, 1)
	for _, f := range []float64{20, 35, 100, 1000, 10e3} {
		s := complex(0, 2*math.Pi*f)
		want, err := same.circuit.At(s)
		if err != nil {
			t.Fatal(err)
		}
		got, err := fitted.At(s)
		if err != nil {
			t.Fatal(err)
		}
		nearC(t, "fitted", got.Gain[0], want.Gain[0], 1e-7)
		ss.Response(gain, s)
		nearC(t, "state space", gain[0], want.Gain[0], 1e-7)
	}
	const wantNote = `driver "woofer": in sound files its impedance is an equivalent circuit, within `
	if n := sys.FitNotes(); len(n) != 1 || !strings.HasPrefix(n[0], wantNote) {
		t.Errorf("got notes %q", n)
	}
	if n := same.FitNotes(); len(n) != 0 {
		t.Errorf("without a table: %q", n)
	}
}

func TestFitNotes(t *testing.T) {
	for src, want := range map[string]string{
		// |Z| and angle of what is no driver: a tank cannot follow, whatever the fit.
		"20 8 80\n40 80 -80\n80 8 80\n160 80 -80\n320 8 80\n640 80 -80\n1280 8 80\n": "; that is far for a driver: check the table",
	} {
		d := &xover.Design{
			Drivers: []xover.Driver{{Name: "woofer", ImpedanceFile: "w.zma"}},
			Ways:    []xover.Way{{Name: "low", Driver: "woofer"}},
		}
		sys, err := New(d, files(map[string]string{"w.zma": src}))
		if err != nil {
			t.Fatal(err)
		}
		if n := sys.FitNotes(); len(n) != 1 || !strings.HasSuffix(n[0], want) {
			t.Errorf("got %q, want %q at the end", n, want)
		}
	}
}
