package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"strings"
	"testing"

	"sixdown/sim/circuit"
	"sixdown/sim/driver"
	"sixdown/sim/field"
	"sixdown/xover"
)

// woofers are equal drivers at the origin.
func woofers(names ...string) []xover.Driver {
	var ds []xover.Driver
	for _, name := range names {
		ds = append(ds, xover.Driver{Name: name, Re: 6, Le: 0.5e-3, Fs: 40, Qms: 4, Qes: 0.5, Sensitivity: 88, HasSensitivity: true})
	}
	return ds
}

func join(op xover.ExprOp, args ...*xover.Expr) *xover.Expr { return &xover.Expr{Op: op, Args: args} }

// Equal drivers in one place on a stiff amplifier, by hand. Each gets a share of the voltage, and n equal pressures
// add up to n times one.
func TestEqualDriversJoined(t *testing.T) {
	freqs := []float64{20, 40, 150, 1000, 9000}
	one := mustPredict(t, mustNew(t, oneWay(woofers("a")[0])), freqs...)
	for _, tt := range []struct {
		name       string
		drivers    *xover.Expr
		db, zTimes float64
	}{
		{"two in parallel: each all of it", inParallel("a", "b"), 20 * math.Log10(2), 0.5},
		{"two in series: each half of it", inSeries("a", "b"), 0, 2},
		{"two pairs in series, in parallel", join(xover.InParallel, inSeries("a", "b"), inSeries("c", "d")), 20 * math.Log10(2), 1},
		{"two parallel pairs, in series", join(xover.InSeries, inParallel("a", "b"), inParallel("c", "d")), 20 * math.Log10(2), 1},
		{"one, then two in parallel: 2/3 and twice 1/3", join(xover.InSeries, leaf("a"), inParallel("b", "c")), 20 * math.Log10(4.0/3), 1.5},
		{"four in parallel", inParallel("a", "b", "c", "d"), 20 * math.Log10(4), 0.25},
	} {
		d := &xover.Design{Drivers: woofers("a", "b", "c", "d"), Ways: []xover.Way{{Name: "low", Driver: "of no meaning", Drivers: tt.drivers}}}
		s := mustNew(t, d)
		r := mustPredict(t, s, freqs...)
		for k, f := range freqs {
			what := fmt.Sprintf("%s, %g Hz: ", tt.name, f)
			near(t, what+"level", SPL(r.Sum[k])-SPL(one.Sum[k]), tt.db, 1e-10)
			near(t, what+"phase", PhaseDeg(r.Sum[k]/one.Sum[k]), 0, 1e-9)
			nearC(t, what+"impedance", r.Zin[k], one.Zin[k]*complex(tt.zTimes, 0), 1e-12)
			nearC(t, what+"gain", r.Ways[0].H[k], 1, 1e-13)
			near(t, what+"delay", r.SumDelay[k], one.SumDelay[k], 1e-9) // nudge
		}
		if got := r.Ways[0].Driver; got != tt.drivers.String() {
			t.Errorf("%s: called %q", tt.name, got)
		}
		d.Ways[0].Reversed = true
		nearC(t, tt.name+": reversed", mustPredict(t, mustNew(t, d), 1000).Sum[0], -r.Sum[3], 1e-13)
	}
}

// Different drivers in series divide as Z1/(Z1 + Z2), by hand for a coil in one of them: 6 Ω + jω·1 mH below 4 Ω, and
// each sounds by its own share: sensitivity is at its own 2.83 V.
func TestSeriesDivides(t *testing.T) {
	a := xover.Driver{Name: "a", Re: 6, Le: 1e-3, Sensitivity: 90, HasSensitivity: true}
	b := plainDriver("b", 4, 84)
	d := &xover.Design{Drivers: []xover.Driver{a, b}, Ways: []xover.Way{{Name: "low", Drivers: inSeries("a", "b")}}}
	pa := func(db float64) complex128 { return complex(20e-6*math.Pow(10, db/20), 0) }
	s := mustNew(t, d)
	for _, f := range []float64{100, 1000, 5000} {
		z := complex(6, 2*math.Pi*f*1e-3)
		want := (pa(90)*z + pa(84)*4) / (z + 4)
		r := mustPredict(t, s, f)
		nearC(t, fmt.Sprintf("pressure at %g Hz", f), r.Sum[0], want, 1e-12)
		nearC(t, fmt.Sprintf("impedance at %g Hz", f), r.Zin[0], z+4, 1e-12)
	}
	// 2 V rms of open circuit behind 5 Ω, on 5 Ω + 10 Ω + 5 Ω: of it the drivers have 1/5, 2/5 and 1/5.
	d = &xover.Design{
		Drive:   xover.Drive{Level: 2, Source: 5},
		Drivers: []xover.Driver{plainDriver("a", 5, 90), plainDriver("b", 10, 80), plainDriver("c", 5, 70)},
		Ways:    []xover.Way{{Name: "low", Drivers: inSeries("a", "b", "c")}},
	}
	r := mustPredict(t, mustNew(t, d), 1000)
	nearC(t, "gain behind a source", r.Ways[0].H[0], 0.8, 1e-13)
	nearC(t, "pressure behind a source", r.Sum[0], 2/2.83*(0.2*pa(90)+0.4*pa(80)+0.2*pa(70)), 1e-12)
}

// nested is a way whose drivers differ and are joined three deep behind a network, beside another way.
func nested() *xover.Design {
	d := benchDesign()
	d.Drivers[0].LossR2, d.Drivers[0].LossL2 = 25, 1.5e-3
	for i, name := range []string{"w2", "w3", "w4"} {
		x := d.Drivers[0]
		x.Name, x.Re, x.Le, x.Fs = name, x.Re*(1+0.2*float64(i)), x.Le/(2+float64(i)), x.Fs*1.5
		d.Drivers = append(d.Drivers, x)
	}
	d.Ways[0].Drivers = join(xover.InParallel, join(xover.InSeries, leaf("woofer"), inParallel("w2", "w3")), leaf("w4"))
	return d
}

// The other road to each driver's voltage: the circuit's, across the driver's own branch.
func TestSharesAreTheCircuits(t *testing.T) {
	s := mustNew(t, nested())
	net := s.Netlist()
	outs := s.Outputs()[:1]
	for _, b := range s.DriverBranches(0) {
		outs = append(outs, circuit.Output{From: net.Branches[b].From, To: net.Branches[b].To})
	}
	var names []string
	for _, b := range s.DriverBranches(0) {
		names = append(names, net.Branches[b].Name)
	}
	if want := []string{"woofer", "w2", "w3", "w4"}; !slices.Equal(names, want) {
		t.Fatalf("branches %q, want %q", names, want)
	}
	c, err := circuit.Compile(net, outs)
	if err != nil {
		t.Fatal(err)
	}
	ss, err := circuit.NewStateSpace(net, outs)
	if err != nil {
		t.Fatal(err)
	}
	h := make([]complex128, len(outs))
	for _, f := range []float64{10, 35, 120, 1000, 20e3} {
		jw := complex(0, 2*math.Pi*f)
		at, err := c.At(jw)
		if err != nil {
			t.Fatal(err)
		}
		ss.Response(h, jw)
		for i, u := range s.unitsOf(0) {
			what := fmt.Sprintf("%s at %g Hz: ", names[i], f)
			nearC(t, what+"circuit", u.share(jw)*at.Gain[0], at.Gain[i+1], 1e-9) // the promised agreement of two roads
			nearC(t, what+"state space", u.share(jw)*h[0], h[i+1], 1e-9)
		}
	}
}

// Pressures times the gain is what Predict says, for drivers joined too, and nothing is allocated.
func TestPressuresOfJoinedDrivers(t *testing.T) {
	d := nested()
	for i := range d.Drivers {
		d.Drivers[i].At = [3]float64{0, 0.1 * float64(i), 0}
	}
	s := mustNew(t, d)
	freqs := []float64{20, 200, 2000}
	r := mustPredict(t, s, freqs...)
	air := make([]complex128, len(freqs))
	if n := testing.AllocsPerRun(10, func() { s.Pressures(air, 0, freqs) }); n != 0 {
		t.Errorf("%g allocations", n)
	}
	for k := range freqs {
		nearC(t, fmt.Sprintf("at %g Hz", freqs[k]), air[k]*r.Ways[0].H[k], r.Ways[0].P[k], 1e-13)
	}
}

// Two mids a distance d above and below a tweeter, after J. A. D'Appolito, "A Geometric Approach to Eliminating
// Lobing Error in Multiway Loudspeakers", 74th AES Convention, preprint 2000, 1983 (from memory). By hand: the pair
// gives 2cos(2πd·sinθ/λ) from afar, so that it is silent at sinθ = λ/4d; and whatever the tweeter gives, and however far
// behind the mids it stands, the sum is the same above as below, since each path above has its like below.
func TestMidsAboutATweeter(t *testing.T) {
	const f, half, far = 1000.0, 0.1715, 1e4 // m; λ/2
	d := &xover.Design{
		Listen:  xover.Listen{Distance: far},
		Drivers: []xover.Driver{plainDriver("upper", 8, 90), plainDriver("lower", 8, 90)},
		Ways:    []xover.Way{{Name: "mids", Drivers: inParallel("upper", "lower")}},
	}
	d.Drivers[0].At[1], d.Drivers[1].At[1] = half, -half
	s := mustNew(t, d)
	one := complex(20e-6*math.Pow(10, 90.0/20)/far, 0)
	for _, deg := range []float64{0, 5, -10, 20, 30, -45, 60, 90} {
		r, err := s.PredictAt([]float64{f}, field.Angle{VerticalDeg: deg})
		if err != nil {
			t.Fatal(err)
		}
		want := 2 * math.Cos(math.Pi*math.Sin(deg*math.Pi/180))                  // 2πd/λ = π
		near(t, fmt.Sprintf("pair at %g°", deg), real(r.Sum[0]/one), want, 1e-4) // the far-field approximation: d/far, and π·d/far of phase
		near(t, fmt.Sprintf("pair at %g°, in quadrature", deg), imag(r.Sum[0]/one), 0, 1e-4)
	}

	// Near by, with a network and the tweeter behind.
	d = twoWay(linkwitzRiley4, 2000, 8, false)
	d.Drivers = append(d.Drivers, plainDriver("lower", 8, 90))
	d.Drivers[0].At, d.Drivers[2].At, d.Drivers[1].At = [3]float64{0, half, 0}, [3]float64{0, -half, 0}, [3]float64{0.03, 0, -0.02}
	d.Ways[0].Drivers = inSeries("woofer", "lower")
	s = mustNew(t, d)
	freqs := []float64{300, 1000, 2000, 3500}
	for _, deg := range []float64{3, 15, 40, 80} {
		rs, err := s.Field(freqs, []field.Angle{{VerticalDeg: deg}, {VerticalDeg: -deg}})
		if err != nil {
			t.Fatal(err)
		}
		for k, f := range freqs {
			nearC(t, fmt.Sprintf("%g Hz, %g° below", f, deg), rs[1].Sum[k], rs[0].Sum[k], 1e-11)
		}
	}
	// By hand, 40° up at 1 m: each mid has half its way's voltage, and paths of its own.
	r, err := s.PredictAt([]float64{1000}, field.Angle{VerticalDeg: 40})
	if err != nil {
		t.Fatal(err)
	}
	sin, cos := math.Sincos(40 * math.Pi / 180)
	want := complex128(0)
	for _, y := range []float64{half, -half} {
		m := math.Hypot(cos, sin-y)
		want += cmplx.Rect(20e-6*math.Pow(10, 90.0/20)/2/m, -2*math.Pi*1000*(m-1)/343) * r.Ways[0].H[0]
	}
	nearC(t, "mids at 40°", r.Ways[0].P[0], want, 1e-12)

	// The lobe is straight ahead, its nulls as far below as above, where a way of one driver would tilt.
	as, err := s.Alignment([2]float64{200, 20e3})
	if err != nil || len(as) != 1 {
		t.Fatalf("%d crossings, %v", len(as), err)
	}
	lobe := as[0].Lobe
	near(t, "main lobe", lobe.AngleDeg, 0, 1e-3) // the search's own fineness
	if len(lobe.Nulls) != 2 {
		t.Fatalf("nulls %+v", lobe.Nulls)
	}
	near(t, "nulls", lobe.Nulls[0].AngleDeg, -lobe.Nulls[1].AngleDeg, 1e-3)
}

// Of each driver in a way that is a table, the circuit that is fitted stands in its own branch.
func TestFitsOfJoinedDrivers(t *testing.T) {
	a := driver.DataSheet{Re: 5.6, Le: 0.7e-3, Fs: 35, Qms: 3.5, Qes: 0.4}
	b := driver.DataSheet{Re: 3.2, Le: 0.2e-3, Fs: 60, Qms: 5, Qes: 0.6}
	ways := []xover.Way{{Name: "low", Drivers: inSeries("a", "b")}}
	open := files(map[string]string{"a.zma": sheetTable(a, 300), "b.zma": sheetTable(b, 300)})
	tables, err := New(&xover.Design{Drive: xover.Drive{Source: 2}, Ways: ways,
		Drivers: []xover.Driver{{Name: "b", ImpedanceFile: "b.zma"}, {Name: "a", ImpedanceFile: "a.zma"}}}, open)
	if err != nil {
		t.Fatal(err)
	}
	if fits := tables.Fits(); len(fits) != 2 || fits[0].Driver != "a" || fits[1].Driver != "b" {
		t.Fatalf("got %+v", fits)
	}
	ss, err := circuit.NewStateSpace(tables.FittedNetlist(), tables.Outputs())
	if err != nil {
		t.Fatal(err)
	}
	gain := make([]complex128, 1)
	for _, f := range []float64{20, 35, 60, 100, 1000, 10e3} {
		s := complex(0, 2*math.Pi*f)
		z := a.Impedance(s) + b.Impedance(s)
		ss.Response(gain, s)
		nearC(t, fmt.Sprintf("gain at %g Hz", f), gain[0], z/(2+z), 1e-6) // no noise: twelve figures were written
	}
}

// What is said of a driver names it, whatever it is joined with.
func TestJoinedDriversAreNamed(t *testing.T) {
	d := &xover.Design{Drivers: woofers("a", "b"), Ways: []xover.Way{{Name: "low", Drivers: inParallel("a", "b")}}}
	d.Drivers[1].HasSensitivity = false
	s := mustNew(t, d)
	const silent = `driver "b": it has neither response nor sensitivity, so no sum is given; give one of them`
	if ws := s.Warnings(); !slices.Equal(ws, []string{silent}) {
		t.Errorf("got warnings %q, want %q", ws, silent)
	}
	if r := mustPredict(t, s, 100); s.Sounds(0) || s.Sums() || r.Ways[0].P != nil || r.Sum != nil {
		t.Error("there is sound of a way that is silent in part")
	}

	d.Drivers[1].ResponseFile = "b.frd"
	s, err := New(d, files(map[string]string{"b.frd": "100 90 0\n200 90 0\n400 90 0\n1000 90 0\n"}))
	if err != nil {
		t.Fatal(err)
	}
	r, err := s.PredictAt([]float64{2000}, field.Angle{HorizontalDeg: 30})
	if err != nil {
		t.Fatal(err)
	}
	all := strings.Join(r.Warnings, "\n")
	if !strings.Contains(all, "b.frd: the table ends at 1.00 kHz") || !strings.Contains(all, `driver "b": its response was measured`) || strings.Contains(all, `"a"`) {
		t.Errorf("got warnings\n%s", all)
	}

	d = &xover.Design{Drivers: woofers("a", "b"), Ways: []xover.Way{{Name: "low", Drivers: inParallel("a", "b")}}}
	d.Drivers[1].At[1] = 1
	if _, err := mustNew(t, d).PredictAt([]float64{100}, field.Angle{VerticalDeg: 90}); err == nil || !strings.HasPrefix(err.Error(), `driver "b": it stands where the ear is at 0, 90 degrees`) {
		t.Errorf("at the ear: %v", err)
	}
}

func TestBadJoints(t *testing.T) {
	const none = `way "low": its drivers are joined by what is no expression; use those of package xover`
	for _, tt := range []struct {
		name string
		e    *xover.Expr
		want string
	}{
		{"unknown driver", inSeries("a", "c"), `way "low": driver "c" is not defined; define it under [driver.c]`},
		{"nothing in series", join(xover.InSeries), none},
		{"a hole", join(xover.InParallel, leaf("a"), nil), none},
		{"a hole further in", join(xover.InSeries, join(xover.InParallel, leaf("a"), nil), leaf("b")), none},
		{"unknown joint", join(9, leaf("a"), leaf("b")), none},
	} {
		s, err := New(&xover.Design{Drivers: woofers("a", "b"), Ways: []xover.Way{{Name: "low", Drivers: tt.e}}}, nil)
		if err == nil || err.Error() != tt.want || s != nil {
			t.Errorf("%s: got %v, want %s", tt.name, err, tt.want)
		}
	}
}
