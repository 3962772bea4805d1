package signal_test

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"sixdown/audioio/signal"
)

func TestNewSchedule(t *testing.T) {
	var hz []float64
	for _, rate := range []int{44100, 48000, 96000, 192000} {
		hz = hz[:0]
		for _, b := range signal.ThirdOctaves(10, 80000) {
			if b.Hz < signal.MaxToneHz(rate) {
				hz = append(hz, b.Hz)
			}
		}
		plan, err := signal.NewSchedule(hz, rate, signal.ToneSettings{
			Settle: func(hz float64) float64 { return 5 / hz }, LeadSeconds: 0.5, GapSeconds: 0.1, TailSeconds: 0.25,
		})
		if err != nil {
			t.Fatal(err)
		}
		if err := plan.Validate(); err != nil {
			t.Fatal(err)
		}
		at := 0
		for i, tone := range plan.Tones {
			r := float64(rate)
			// Definition of coherent sampling (IEEE Std 1057): J cycles in M samples, J and M without a common divisor.
			if f := float64(tone.Cycles) * r / float64(tone.MeasureSamples); f != tone.FrequencyHz {
				t.Errorf("tone %d: %v Hz, its cycles and samples say %v", i, tone.FrequencyHz, f)
			}
			for d := 2; d <= tone.Cycles; d++ {
				if tone.Cycles%d == 0 && tone.MeasureSamples%d == 0 {
					t.Errorf("tone %d: %d cycles and %d samples share the divisor %d", i, tone.Cycles, tone.MeasureSamples, d)
				}
			}
			if tone.Cycles < 10 || tone.MeasureSamples < rate/4 {
				t.Errorf("tone %d: window of %d cycles, %d samples", i, tone.Cycles, tone.MeasureSamples)
			}
			// Rounding up the window and avoiding common divisors move it by a few samples at most.
			if d := (hz[i] - tone.FrequencyHz) / hz[i]; d < 0 || d > 12/float64(tone.MeasureSamples) {
				t.Errorf("tone %d: %v Hz asked, %v Hz given, off by %.1g", i, hz[i], tone.FrequencyHz, d)
			}
			if want := at + map[bool]int{true: rate / 2, false: rate / 10}[i == 0]; tone.StartSample != want {
				t.Errorf("tone %d starts at %d, want %d", i, tone.StartSample, want)
			}
			if s := float64(tone.SettleSamples-tone.EdgeSamples) / r; s < 5/hz[i] || s > 5/hz[i]+1/r {
				t.Errorf("tone %d settles in %v s, want %v", i, s, 5/hz[i])
			}
			at = tone.End()
		}
		if plan.LengthSamples != at+rate/4 {
			t.Errorf("length %d, want %d", plan.LengthSamples, at+rate/4)
		}
	}
}

// A schedule for the usual third octaves must not try the builder's patience.
func TestScheduleLength(t *testing.T) {
	var hz []float64
	for _, b := range signal.ThirdOctaves(20, 20000) {
		hz = append(hz, b.Hz)
	}
	plan, err := signal.NewSchedule(hz, 48000, signal.ToneSettings{})
	if err != nil {
		t.Fatal(err)
	}
	// 31 tones of 0.25 s of window, 0.1 s to settle and two 10 ms edges are 11.5 s; the
	// window of 10 cycles and the edge of one cycle below 40 Hz and 100 Hz add about 1.6 s.
	if s := float64(plan.LengthSamples) / 48000; s < 11.5 || s > 14 {
		t.Errorf("the schedule takes %v s", s)
	}
}

// The keys are a contract with other programs.
func TestScheduleJSON(t *testing.T) {
	plan, err := signal.NewSchedule([]float64{1000}, 48000, signal.ToneSettings{VoltsPerFullScale: 4})
	if err != nil {
		t.Fatal(err)
	}
	b, err := json.Marshal(plan)
	if err != nil {
		t.Fatal(err)
	}
	for _, key := range []string{
		`"rate":48000`, `"volts_per_full_scale":4`, `"peak":0.5`, `"length_samples":`, `"tones":[{`, `"frequency_hz":`,
		`"start_sample":0`, `"edge_samples":480`, `"settle_samples":5280`, `"measure_samples":`, `"cycles":250`,
	} {
		if !strings.Contains(string(b), key) {
			t.Errorf("no %s in %s", key, b)
		}
	}
	var back signal.Schedule
	if err := json.Unmarshal(b, &back); err != nil {
		t.Fatal(err)
	}
	if err := back.Validate(); err != nil {
		t.Error(err)
	}
	if back.Tones[0] != plan.Tones[0] {
		t.Errorf("came back as %+v", back.Tones[0])
	}
}

func TestNewScheduleRefuses(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for name, tt := range map[string]struct {
		hz   []float64
		rate int
		s    signal.ToneSettings
	}{
		"no frequency":    {nil, 48000, signal.ToneSettings{}},
		"at 0.45 rate":    {[]float64{21600}, 48000, signal.ToneSettings{}},
		"zero":            {[]float64{0}, 48000, signal.ToneSettings{}},
		"not a number":    {[]float64{nan}, 48000, signal.ToneSettings{}},
		"infinite":        {[]float64{inf}, 48000, signal.ToneSettings{}},
		"hardly above 0":  {[]float64{1e-300}, 48000, signal.ToneSettings{}},
		"a day long":      {[]float64{1e-4, 2e-4}, 48000, signal.ToneSettings{}},
		"no rate":         {[]float64{1000}, 0, signal.ToneSettings{}},
		"peak above 1":    {[]float64{1000}, 48000, signal.ToneSettings{Peak: 1.1}},
		"peak NaN":        {[]float64{1000}, 48000, signal.ToneSettings{Peak: nan}},
		"window negative": {[]float64{1000}, 48000, signal.ToneSettings{MeasureSeconds: -1}},
		"window infinite": {[]float64{1000}, 48000, signal.ToneSettings{MeasureSeconds: inf}},
		"cycles negative": {[]float64{1000}, 48000, signal.ToneSettings{MinCycles: -1}},
		"edge NaN":        {[]float64{1000}, 48000, signal.ToneSettings{EdgeSeconds: nan}},
		"settle infinite": {[]float64{1000}, 48000, signal.ToneSettings{Settle: func(float64) float64 { return inf }}},
		"volts negative":  {[]float64{1000}, 48000, signal.ToneSettings{VoltsPerFullScale: -1}},
	} {
		if plan, err := signal.NewSchedule(tt.hz, tt.rate, tt.s); err == nil || plan != nil {
			t.Errorf("%s: taken", name)
		}
	}
}

func TestValidateRefuses(t *testing.T) {
	for name, spoil := range map[string]func(*signal.Schedule){
		"rate":              func(s *signal.Schedule) { s.Rate = 0 },
		"volts":             func(s *signal.Schedule) { s.VoltsPerFullScale = math.NaN() },
		"peak":              func(s *signal.Schedule) { s.Peak = 2 },
		"no tones":          func(s *signal.Schedule) { s.Tones = nil },
		"length too short":  func(s *signal.Schedule) { s.LengthSamples = 10 },
		"length huge":       func(s *signal.Schedule) { s.LengthSamples = math.MaxInt },
		"start negative":    func(s *signal.Schedule) { s.Tones[0].StartSample = -1 },
		"start huge":        func(s *signal.Schedule) { s.Tones[1].StartSample = math.MaxInt },
		"overlap":           func(s *signal.Schedule) { s.Tones[1].StartSample-- },
		"no cycles":         func(s *signal.Schedule) { s.Tones[0].Cycles = 0 },
		"too many cycles":   func(s *signal.Schedule) { s.Tones[0].Cycles = s.Tones[0].MeasureSamples },
		"frequency":         func(s *signal.Schedule) { s.Tones[0].FrequencyHz *= 1.001 },
		"frequency NaN":     func(s *signal.Schedule) { s.Tones[0].FrequencyHz = math.NaN() },
		"no window":         func(s *signal.Schedule) { s.Tones[0].MeasureSamples = 0 },
		"measured too soon": func(s *signal.Schedule) { s.Tones[0].SettleSamples = s.Tones[0].EdgeSamples - 1 },
	} {
		plan, err := signal.NewSchedule([]float64{100, 1000}, 48000, signal.ToneSettings{})
		if err != nil {
			t.Fatal(err)
		}
		spoil(plan)
		if err := plan.Validate(); err == nil {
			t.Errorf("%s: passed", name)
		}
		if src, err := signal.NewTones(plan); err == nil || src != nil {
			t.Errorf("%s: played", name)
		}
	}
}
