package driver

import (
	"math"
	"math/cmplx"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// An Estimate is a value and its standard deviation, in the same unit.
type Estimate struct{ Value, Sigma float64 }

// Told reports whether there is a value, > 0, and it is more than a guess: its standard deviation is no more than half of it.
func (e Estimate) Told() bool { return e.Value > 0 && e.Sigma <= e.Value/2 }

// A Resonance is a resistor, an inductor and a capacitor in parallel.
type Resonance struct {
	Frequency float64 // Hz
	R         float64 // Ω, its impedance there
	Q         float64
}

// A VentedFit is what an impedance with two resonances says of a vented box.
type VentedFit struct {
	Fb        Estimate // Hz, tuning
	Alpha     Estimate // Vas over the box's net volume
	QL        Estimate // Q of the leakage at Fb
	Low, High float64  // Hz, where the two resonances are
}

// A Fit is an equivalent circuit that was fitted to an impedance table: Re, the coil, the motional branch with
// its box, and resonances beyond, in series. It is a Load whose every element is positive.
type Fit struct {
	Re    Estimate // Ω
	Coil  Coil     // which model of the voice coil
	Le    float64  // H; 0: none
	Loss  []LossPair
	Semi  Leach // of the coil SemiInductance, for which a ladder of pairs stands in the circuit; K is 0: none
	Extra []Resonance

	// The driver as it was measured, in its box if it was in one; all 0 if the table shows no resonance. Of a vented box
	// Fs and the Qs are those of the driver with the vent blocked and the box's air taken away.
	Fs            Estimate // Hz
	Qms, Qes, Qts Estimate
	Box           *VentedFit // nil unless there are two resonances, of driver and vent

	// How far the circuit is from the table, |Z/Z table - 1|.
	RMSPercent   float64 // over log frequency
	WorstPercent float64
	WorstAt      float64 // Hz

	chain chain
}

// Impedance returns that of the circuit.
func (f *Fit) Impedance(s complex128) complex128 { return f.chain.Impedance(s) }

// Elements returns the circuit.
func (f *Fit) Elements() []Element { return f.chain.elements() }

// FitSettings say what may be fitted. The zero value lets the data choose.
type FitSettings struct {
	Coil Coil // AutoCoil: whichever the data speak for
}

// FitImpedance fits an equivalent circuit to the rows of an impedance table.
//
// Start values come from the curve; then a damped least-squares search with exact derivatives brings the
// logarithm of fitted over measured impedance down; how many elements there are is for Schwarz's criterion to say.
// The standard deviations come from the derivatives and from what is left over, which is taken as noise; where
// neighbouring rows err alike they grow by √((1 + ρ)/(1 - ρ)), ρ being the correlation of neighbours (M. S. Bartlett,
// "On the Theoretical Specification and Sampling Properties of Autocorrelated Time-Series", Suppl. J. Royal
// Statist. Soc. 8(1), 27–41, 1946).
//
// There is always a fit; from rows that are few, or of what is no driver, it is a poor one, as its errors say. 500
// rows take some tens of milliseconds.
func FitImpedance(t *ImpedanceTable, set FitSettings) *Fit {
	fine := newSearch(t.freqs, t.Impedance)
	best := fine.fit(fine.coarse().choose(set.Coil).model, 2*mostSteps)
	f := fine.result(best)
	f.judge(t)
	return f
}

// Tables finer than this are thinned by means over as narrow bands: half of it is less than a tenth of the
// width of any resonance that counts.
const (
	finePoints = 600
	fineBand   = 1.0 / 48 // octave
)

// newSearch makes the points of a table.
func newSearch(freqs []float64, impedance func(complex128) complex128) *search {
	s := &search{small: 1e-9}
	for i := 0; i < len(freqs); {
		lnW, lnZ, n := 0.0, complex(0, 0), 0
		first := impedance(complex(0, 2*math.Pi*freqs[i]))
		for from := freqs[i]; i < len(freqs) && (n == 0 || len(freqs) > finePoints && freqs[i] < from*math.Exp2(fineBand)); i++ {
			w := 2 * math.Pi * freqs[i]
			lnW += math.Log(w)
			lnZ += cmplx.Log(impedance(complex(0, w)) / first)
			n++
		}
		z := first * cmplx.Exp(lnZ/complex(float64(n), 0))
		s.points = append(s.points, point{w: math.Exp(lnW / float64(n)), z: z})
	}
	s.weigh()
	return s
}

// coarsePoints are as many as a choice of model takes.
const coarsePoints = 250

// coarse returns a search over fewer points, and not to the last digit: for choosing a model.
func (s *search) coarse() *search {
	every := (len(s.points) + coarsePoints - 1) / coarsePoints
	c := &search{small: 1e-4}
	for i := 0; i < len(s.points); i += every {
		c.points = append(c.points, s.points[i])
	}
	c.weigh()
	c.enough = float64(len(c.points)) * resolution * resolution / 100
	return c
}

// weigh sets what follows from the points, and their weights.
func (s *search) weigh() {
	n := len(s.points)
	s.band = [2]float64{s.points[0].w, s.points[n-1].w}
	s.ohm = math.Inf(1)
	for i := range s.points {
		s.ohm = math.Min(s.ohm, cmplx.Abs(s.points[i].z))
	}
	if n == 1 {
		s.points[0].weight = 1
		return
	}
	mean := math.Log(s.band[1]/s.band[0]) / float64(n-1)
	total := 0.0
	for i := range s.points {
		a, b := max(i-1, 0), min(i+1, n-1)
		share := math.Log(s.points[b].w/s.points[a].w) / float64(b-a) / mean
		// A gap is no evidence for what its edges say.
		s.points[i].weight = math.Min(share, 5)
		total += s.points[i].weight
	}
	for i := range s.points {
		s.points[i].weight *= float64(n) / total
	}
}

// The limits of a search.
const (
	mostSteps  = 40
	mostExtras = 3
	faintest   = 1e-3 // of the lowest |Z|: a resonance below is beyond what is measured

	// By how much a score must drop for an element to be worth having: very strong evidence, say R. E. Kass and A. E.
	// Raftery, "Bayes Factors", J. Amer. Statist. Assoc. 90, 773–795, 1995.
	worthwhile = 10
)

// choose grows a model: the body first, then the coil, then one resonance after another as long as the
// criterion asks for it. The second resonance is tried as a vented box's too.
func (s *search) choose(coil Coil) fitted {
	m := s.first(s.humps())
	if !s.affords(m) {
		m = &model{coil: NoCoil, p: []float64{math.Log(s.ohm)}}
	}
	best := s.fit(m, mostSteps)
	best = s.chooseCoil(best, coil)
	for range 1 + mostExtras {
		next, ok := s.grow(best, coil)
		if !ok {
			break
		}
		best = next
	}
	return s.prune(best, coil)
}

// prune takes out broad resonances that were put in while the coil was still wrong, if another coil does without.
func (s *search) prune(f fitted, coil Coil) fitted {
	for k := 0; k < f.extras; {
		at := f.extrasAt() + 3*k
		if f.p[at+2] > 0 { // Q above 1
			k++
			continue
		}
		m := f.clone()
		m.extras--
		m.p = slices.Delete(m.p, at, at+3)
		if g := s.chooseCoil(s.fit(m, mostSteps), coil); s.score(g) < s.score(f)+worthwhile {
			f = g
		} else {
			k++
		}
	}
	return f
}

// affords reports whether the points can bear a model of so many unknowns: half as many as there are numbers.
func (s *search) affords(m *model) bool { return m.size() <= len(s.points) }

// chooseCoil returns f with the coil asked for, or with the one that the criterion prefers.
func (s *search) chooseCoil(f fitted, coil Coil) fitted {
	if coil != AutoCoil {
		if f.coil == coil {
			return f
		}
		return s.fit(s.with(f, coil), mostSteps)
	}
	best, least := f, s.score(f)
	for _, c := range [...]Coil{NoCoil, PlainCoil, OneLoss, TwoLosses, SemiInductance} {
		m := s.with(f, c)
		if c == f.coil || !s.affords(m) {
			continue
		}
		if g := s.fit(m, mostSteps); s.score(g) < least || !s.affords(best.model) {
			best, least = g, s.score(g)
		}
	}
	return best
}

// grow returns f with one more resonance and its coil chosen anew, if that is worth it. The coil is chosen before a
// box and two resonances apart are compared: while it is wrong, its misfit hides what tells them apart.
func (s *search) grow(f fitted, coil Coil) (fitted, bool) {
	h, ok := s.missing(f)
	if !ok {
		return f, false
	}
	m := f.plus(h)
	if m.extras > mostExtras || !s.affords(m) {
		return f, false
	}
	apart := s.fit(m, mostSteps)
	if r := math.Exp(apart.p[len(apart.p)-2]); r < faintest*s.ohm {
		return f, false
	}
	next := s.chooseCoil(apart, coil)
	if f.body == single && f.extras == 0 {
		if box := s.fit(s.boxed(apart), 2*mostSteps); isBox(box) {
			// Two resonances of a driver's size can hardly be anything else, so the box has the benefit of the doubt.
			doubt := 0.0
			if k := apart.bodyAt() + 1; math.Min(apart.p[k], apart.p[k+3]) > apart.p[0]-math.Ln2 { // both R above Re/2
				doubt = worthwhile
			}
			if box = s.chooseCoil(box, coil); isBox(box) && s.score(box) < s.score(next)+doubt {
				next = box
			}
		}
	}
	return next, s.score(next) < s.score(f)-worthwhile
}

// isBox reports whether a vented model's values are those of a box in use. Alignments from the tables of Thiele and
// of Small lie well within: fb from half to twice fs, α from 0.3 to 10, QL from 3. Nor is a box with a vent tuned
// above the bass (common practice, no source). Outside, the second resonance is the surround's, or something else's.
func isBox(f fitted) bool {
	v := make([]float64, f.size())
	f.values(v)
	v = v[f.bodyAt():]
	const bass = 2 * math.Pi * 250 // rad/s
	tuned := v[3] / v[0]
	return v[3] < bass && 0.3 < tuned && tuned < 3 && 0.1 < v[4] && v[4] < 30 && v[5] > 1
}

// result puts a fit into the trade's terms.
func (s *search) result(b fitted) *Fit {
	v := make([]float64, b.size())
	b.values(v)
	cov := s.covariance(b)
	sigma := func(k int) float64 {
		if cov == nil {
			return math.Inf(1)
		}
		return math.Sqrt(math.Max(0, cov.At(k, k)))
	}
	estimate := func(k int, unit float64) Estimate { return Estimate{v[k] / unit, v[k] / unit * sigma(k)} }
	f := &Fit{Re: estimate(0, 1), Coil: b.coil, chain: b.circuit(v)}
	switch b.coil {
	case PlainCoil, OneLoss, TwoLosses:
		f.Le = v[1]
		for k := 2; k < b.bodyAt(); k += 2 {
			f.Loss = append(f.Loss, LossPair{v[k], v[k+1]})
		}
	case SemiInductance:
		f.Semi = b.semi(v)
	}
	if k := b.bodyAt(); b.body != still {
		f.Fs = estimate(k, 2*math.Pi)
		f.Qms = estimate(k+2, 1)
		// Qes = Qms·Re/Res and Qts = Qms·Re/(Re + Res): relative errors add with their signs.
		relative := func(re, res float64) float64 {
			if cov == nil {
				return math.Inf(1)
			}
			at, g := [3]int{0, k + 1, k + 2}, [3]float64{re, res, 1}
			sum := 0.0
			for i := range g {
				for j := range g {
					sum += g[i] * g[j] * cov.At(at[i], at[j])
				}
			}
			return math.Sqrt(math.Max(0, sum))
		}
		re, res, qms := v[0], v[k+1], v[k+2]
		qes, qts := qms*re/res, qms*re/(re+res)
		share := res / (re + res)
		f.Qes = Estimate{qes, qes * relative(1, -1)}
		f.Qts = Estimate{qts, qts * relative(share, -share)}
		if b.body == vented {
			f.Box = &VentedFit{Fb: estimate(k+3, 2*math.Pi), Alpha: estimate(k+4, 1), QL: estimate(k+5, 1)}
			fs, fb, a := f.Fs.Value, f.Box.Fb.Value, f.Box.Alpha.Value
			mid := (fs*fs*(1+a) + fb*fb) / 2
			d := math.Sqrt(mid*mid - fs*fs*fb*fb)
			f.Box.Low, f.Box.High = math.Sqrt(fs*fs*fb*fb/(mid+d)), math.Sqrt(mid+d)
		}
	}
	for k := b.extrasAt(); k < len(v); k += 3 {
		f.Extra = append(f.Extra, Resonance{Frequency: v[k] / (2 * math.Pi), R: v[k+1], Q: v[k+2]})
	}
	return f
}

// covariance returns that of the unknowns as they are held; nil if the points do not settle all of them.
func (s *search) covariance(b fitted) *mat.SymDense {
	n := b.size()
	s.look(b.model, true)
	s.equations(n)
	for i := range n {
		s.normal.SetSym(i, i, s.normal.At(i, i)*(1+1e-12)+1e-14)
	}
	var c mat.Cholesky
	if !c.Factorize(s.normal) {
		return nil
	}
	cov := mat.NewSymDense(n, nil)
	_ = c.InverseTo(cov) // an error tells of the condition only
	rows := len(s.points)
	var square, neighbours float64
	for _, part := range [][]float64{s.miss[:rows], s.miss[rows:]} {
		square += dot(part, part)
		neighbours += dot(part[1:], part[:rows-1])
	}
	variance := square / float64(max(2*rows-n, 1))
	if square > 0 {
		rho := math.Max(0, math.Min(0.95, neighbours/square))
		variance *= (1 + rho) / (1 - rho)
	}
	cov.ScaleSym(variance, cov)
	return cov
}

// mostMiss is how far in per cent a circuit may be off its table on the whole to be one for it.
const mostMiss = 10

// Follows reports whether the circuit follows its table. If not, what is read from the circuit means nothing.
func (f *Fit) Follows() bool { return f.RMSPercent <= mostMiss }

// Resonates reports whether the table tells a resonance: its Fs, and its Qts, though not always Qms and Qes apart.
func (f *Fit) Resonates() bool { return f.Follows() && f.Fs.Told() && f.Qts.Told() }

// judge holds the circuit against every row of the table.
func (f *Fit) judge(t *ImpedanceTable) {
	var sum, span float64
	for i, hz := range t.freqs {
		s := complex(0, 2*math.Pi*hz)
		miss := 100 * cmplx.Abs(f.Impedance(s)/t.Impedance(s)-1)
		share := 1.0
		if last := len(t.freqs) - 1; last > 0 {
			share = math.Log(t.freqs[min(i+1, last)] / t.freqs[max(i-1, 0)])
		}
		sum += share * miss * miss
		span += share
		if i == 0 || miss > f.WorstPercent {
			f.WorstPercent, f.WorstAt = miss, hz
		}
	}
	f.RMSPercent = math.Sqrt(sum / span)
}
