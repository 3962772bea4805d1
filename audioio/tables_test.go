package audioio_test

import (
	"fmt"
	"io"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"

	"sixdown/audioio"
	"sixdown/audioio/signal"
	"sixdown/sim"
	"sixdown/sim/driver"
	"sixdown/xover"
)

// tablesOnly makes measurements of a design's drivers: an impedance table of 300 rows with normal errors of the
// given size, and a response table. noise is relative, and in rad. The design is changed to know no more of them.
func tablesOnly(t *testing.T, d *xover.Design, noise float64) *sim.System {
	t.Helper()
	files := map[string]string{}
	r := rand.New(rand.NewPCG(8, 8))
	for i, b := range d.Drivers {
		sheet := driver.DataSheet{Re: b.Re, Le: b.Le, LossR2: b.LossR2, LossL2: b.LossL2, Fs: b.Fs, Qms: b.Qms, Qes: b.Qes}
		if b.Box.Kind == xover.ClosedBox {
			sheet = sheet.InClosedBox(b.Vas, b.Box.Volume)
		}
		sound := driver.NewSheet(sheet, b.Sensitivity)
		var zma, frd strings.Builder
		for k := range 300 {
			f := 10 * math.Pow(3000, float64(k)/299)
			z := sheet.Impedance(complex(0, 2*math.Pi*f)) * cmplx.Rect(1+noise*r.NormFloat64(), noise*r.NormFloat64())
			p := sound.Pressure(f) * driver.ReferenceVoltage / driver.ReferencePressure
			fmt.Fprintf(&zma, "%.9g %.9g %.9g\n", f, cmplx.Abs(z), cmplx.Phase(z)*180/math.Pi)
			fmt.Fprintf(&frd, "%.9g %.9g %.9g\n", f, 20*math.Log10(cmplx.Abs(p)), cmplx.Phase(p)*180/math.Pi)
		}
		files[b.Name+".zma"], files[b.Name+".frd"] = zma.String(), frd.String()
		d.Drivers[i] = xover.Driver{Name: b.Name, At: b.At, ImpedanceFile: b.Name + ".zma", ResponseFile: b.Name + ".frd"}
	}
	sys, err := sim.New(d, func(name string) (io.ReadCloser, error) {
		return io.NopCloser(strings.NewReader(files[name])), nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return sys
}

// A design that knows its drivers by tables alone is rendered through the circuits fitted to them, and verified from
// the file within the limits of designs without tables; what the fits' errors make is told beside it. Held against
// the circuits that the tables were made of, the file is off by no more than the noise explains: 0.5 % in each row
// is √2·0.5 % in all, and 4 % (some 5 σ) of a driver's impedance moves its voltage by 0.35 dB at most.
func TestTablesOnly(t *testing.T) {
	for _, name := range []string{harbour, "breakwater.toml"} {
		_, truth := load(t, name)
		d, _ := load(t, name)
		sys := tablesOnly(t, d, 0.005)
		file, rec := renderTones(t, d, sys, audioio.Settings{})
		v := verify(t, sys, file, rec)
		db, deg := v.WorstGain.GainErrorDB(), v.WorstPhase.PhaseErrorDeg()
		if !v.Pass || math.Abs(db) > 0.002 || math.Abs(deg) > 0.02 {
			t.Errorf("%s: pass %v, worst %.5f dB and %.5f°", name, v.Pass, db, deg)
		}
		if v.WorstFitGain == nil || v.WorstFitPhase == nil {
			t.Fatalf("%s: what the fits make is not told", name)
		}
		fitDB, fitDeg := math.Abs(v.WorstFitGain.FitGainDB()), math.Abs(v.WorstFitPhase.FitPhaseDeg())
		t.Logf("worst %.5f dB and %.5f°; the fits make %.4f dB and %.4f°", db, deg, fitDB, fitDeg)
		if !(fitDB > 0 && fitDB < 0.35 && fitDeg > 0 && fitDeg < 2.3) {
			t.Errorf("%s: the fits make %g dB and %g°", name, fitDB, fitDeg)
		}
		for i := range v.Points {
			p := &v.Points[i]
			if !p.Counted {
				continue
			}
			if miss := math.Abs(sim.DB(p.Measured) - sim.DB(p.Predicted)); miss > v.LimitGainDB+fitDB {
				t.Errorf("%s: %s at %g Hz is %g dB off the prediction", name, p.Way, p.Hz, miss)
			}
		}
		// The file against the true drivers: fits average the noise of 300 rows away, so it is nearer to them than the tables are.
		w := verify(t, truth, file, rec)
		if miss := math.Abs(w.WorstGain.GainErrorDB()); miss > 0.05 {
			t.Errorf("%s: %g dB off the true drivers", name, miss)
		}
		if w.WorstFitGain != nil {
			t.Errorf("%s: a fit without a table", name)
		}
	}
}

// A part that is off is found out as well where the drivers are tables.
func TestOnePerCentIsFoundOutWithTables(t *testing.T) {
	d, _ := load(t, harbour)
	nominal := tablesOnly(t, d, 0.005)
	other, _ := load(t, harbour)
	if err := other.SetPart("C3", 5.6e-6*1.01); err != nil {
		t.Fatal(err)
	}
	file, rec := renderTones(t, d, tablesOnly(t, other, 0.005), audioio.Settings{})
	v := verify(t, nominal, file, rec)
	if v.Pass || len(v.Suspects) == 0 || v.Suspects[0].Part != "C3" {
		t.Fatalf("pass %v, suspects %v", v.Pass, v.Suspects)
	}
	if got := v.Suspects[0].Estimate / 5.6e-6; math.Abs(got-1.01) > 1e-4 { // as in TestOnePerCentIsFoundOut
		t.Errorf("found at %g of its value, it is at 1.01", got)
	}
}

// A sweep through the matched-pole model serves as well.
func TestSweepWithTables(t *testing.T) {
	d, _ := load(t, harbour)
	sys := tablesOnly(t, d, 0.005)
	src, err := signal.NewSweep(48000, 14, 23000, 4, signal.SweepSettings{Peak: 1})
	if err != nil {
		t.Fatal(err)
	}
	var file tape
	in := audioio.Input{Kind: audioio.Sweep, Source: src, Rate: 48000, Volts: 4, BandHz: [2]float64{20, 20000}}
	rec, err := audioio.RenderBroadband(t.Context(), sys, in, &file, audioio.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	if v := verify(t, sys, &file, rec); !v.Pass {
		t.Errorf("worst %.5f dB and %.5f°, limits %g dB and %g°", v.WorstGain.GainErrorDB(), v.WorstPhase.PhaseErrorDeg(), v.LimitGainDB, v.LimitPhaseDeg)
	}
}
