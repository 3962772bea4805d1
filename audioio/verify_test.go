package audioio_test

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"path/filepath"
	"strings"
	"testing"

	"sixdown/audioio"
	"sixdown/audioio/signal"
	"sixdown/audioio/wavfile"
	"sixdown/sim"
	"sixdown/xover"
)

// harbour is the built-in example.
const harbour = "../../cmd/sixdown/internal/demo/harbour.toml"

// a tape is a file in memory.
type tape struct {
	b   []byte
	pos int64
}

func (t *tape) Write(p []byte) (int, error) {
	if end := t.pos + int64(len(p)); end > int64(len(t.b)) {
		t.b = append(t.b, make([]byte, end-int64(len(t.b)))...)
	}
	t.pos += int64(copy(t.b[t.pos:], p))
	return len(p), nil
}

func (t *tape) Seek(offset int64, whence int) (int64, error) {
	switch whence {
	case io.SeekCurrent:
		offset += t.pos
	case io.SeekEnd:
		offset += int64(len(t.b))
	}
	t.pos = offset
	return offset, nil
}

// tones are third-octaves and the design's targets.
func tones(d *xover.Design) []float64 {
	var hz []float64
	for _, b := range signal.ThirdOctaves(20, 20000) {
		hz = append(hz, b.Hz)
	}
	for _, w := range d.Ways {
		for _, t := range w.Targets {
			hz = append(hz, t.Frequency)
		}
	}
	return hz
}

func renderTones(t *testing.T, d *xover.Design, sys *sim.System, set audioio.Settings) (*tape, *audioio.Recording) {
	t.Helper()
	var file tape
	rec, err := audioio.RenderTones(context.Background(), sys, tones(d), &file, set)
	if err != nil {
		t.Fatal(err)
	}
	return &file, rec
}

func verify(t *testing.T, sys *sim.System, file *tape, rec *audioio.Recording) *audioio.Verification {
	t.Helper()
	v, err := audioio.Verify(context.Background(), sys, rec, bytes.NewReader(file.b), audioio.Limits{})
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// The two roads, differential equations in samples and elimination at a frequency, must meet within what the file's
// resolution and the settling allow. The limits are the project's: 0.002 dB and 0.02° at 24 bits, ten times that
// at 16, for every way above -60 dB. A step of 16 bits is 3e-5 of full scale; a tone 60 dB down, averaged
// over 12000 samples, is then uncertain by 0.002 dB rms.
func TestTonesMeetThePrediction(t *testing.T) {
	for _, name := range []string{harbour, "breakwater.toml"} {
		d, sys := load(t, name)
		for _, c := range []struct {
			encoding wavfile.Encoding
			db, deg  float64
		}{
			{wavfile.PCM24, 0.002, 0.02},
			{wavfile.Float32, 0.002, 0.02},
			{wavfile.PCM16, 0.02, 0.2},
		} {
			t.Run(filepath.Base(name)+" "+c.encoding.String(), func(t *testing.T) {
				file, rec := renderTones(t, d, sys, audioio.Settings{
					Wav: wavfile.Settings{Encoding: c.encoding, Dither: rand.NewPCG(1, 1)},
				})
				v := verify(t, sys, file, rec)
				db, deg := v.WorstGain.GainErrorDB(), v.WorstPhase.PhaseErrorDeg()
				t.Logf("worst %.6f dB and %.6f°", db, deg)
				if math.Abs(db) > c.db || math.Abs(deg) > c.deg {
					t.Errorf("worst %.5f dB and %.5f°, limits %g dB and %g°", db, deg, c.db, c.deg)
				}
				counted := 0
				for i := range v.Points {
					if v.Points[i].Counted {
						counted++
					}
				}
				if !v.Pass || v.FloorDB != -60 || counted < len(v.Points)/2 {
					t.Errorf("pass %v, floor %g dB, %d of %d points counted", v.Pass, v.FloorDB, counted, len(v.Points))
				}
			})
		}
	}
}

// The matched-pole model is held to 0.02 dB and 0.2° from 20 Hz to 20 kHz where a way is above -50 dB. Noise is a
// poorer witness: at 20 kHz pink noise has a thousandth of its power at 20 Hz, and in 6 s the rounding of 24
// bits is heard in a way 50 dB down; hence the wider limit.
func TestBroadbandMeetsThePrediction(t *testing.T) {
	for _, name := range []string{harbour, "breakwater.toml"} {
		_, sys := load(t, name)
		for _, rate := range []int{44100, 48000, 96000} {
			sweep, err := signal.NewSweep(rate, 14, 0.48*float64(rate), 6, signal.SweepSettings{Peak: 1})
			if err != nil {
				t.Fatal(err)
			}
			noise, err := signal.NewPink(rate, 6, rand.NewPCG(3, 4), signal.NoiseSettings{Peak: 1})
			if err != nil {
				t.Fatal(err)
			}
			for _, c := range []struct {
				kind    audioio.Kind
				src     signal.Source
				db, deg float64
			}{{audioio.Sweep, sweep, 0.02, 0.2}, {audioio.Noise, noise, 0.1, 1}} {
				t.Run(fmt.Sprintf("%s %s %d Hz", filepath.Base(name), c.kind, rate), func(t *testing.T) {
					var file tape
					in := audioio.Input{Kind: c.kind, Source: c.src, Rate: rate, Volts: 4, BandHz: [2]float64{20, 20000}}
					rec, err := audioio.RenderBroadband(context.Background(), sys, in, &file, audioio.Settings{})
					if err != nil {
						t.Fatal(err)
					}
					v := verify(t, sys, &file, rec)
					db, deg := v.WorstGain.GainErrorDB(), v.WorstPhase.PhaseErrorDeg()
					t.Logf("worst %.5f dB and %.5f°; the fit says %.5f dB and %.5f°", db, deg, rec.FitDB, rec.FitDeg)
					if math.Abs(db) > c.db || math.Abs(deg) > c.deg || !v.Pass {
						t.Errorf("worst %.5f dB and %.5f°, limits %g dB and %g°, pass %v", db, deg, c.db, c.deg, v.Pass)
					}
				})
			}
		}
	}
}

// A part that is off by one per cent must be found out, and named: rendered with it, verified without.
func TestOnePerCentIsFoundOut(t *testing.T) {
	for _, name := range []string{harbour, "breakwater.toml"} {
		d, nominal := load(t, name)
		for _, part := range d.Parts {
			other, _ := load(t, name)
			if err := other.SetPart(part.Name, part.Value*1.01); err != nil {
				t.Fatal(err)
			}
			sys, err := sim.New(other, nil)
			if err != nil {
				t.Fatal(err)
			}
			file, rec := renderTones(t, d, sys, audioio.Settings{})
			v := verify(t, nominal, file, rec)
			if v.Pass {
				t.Errorf("%s: %s is 1 %% off and it passes: worst %.5f dB, %.5f°", d.Title, part.Name, v.WorstGain.GainErrorDB(), v.WorstPhase.PhaseErrorDeg())
				continue
			}
			if len(v.Suspects) == 0 || v.Suspects[0].Part != part.Name {
				t.Errorf("%s: %s is 1 %% off; the suspects are %v", d.Title, part.Name, v.Suspects)
				continue
			}
			// The files are good to 1e-5 dB, so the value is found to a small part of the deviation.
			if s := v.Suspects[0]; math.Abs(s.Estimate/part.Value-1.01) > 1e-4 || s.Explained < 0.999 {
				t.Errorf("%s: %s is at 1.01 of its value; found at %.5f, explaining %.4f", d.Title, part.Name, s.Estimate/part.Value, s.Explained)
			}
		}
	}
}

// A wrong part by a third, as when 4.7 was read for 6.8, is a long step for the fit.
func TestWrongPartIsFoundOut(t *testing.T) {
	d, nominal := load(t, harbour)
	for _, c := range []struct {
		part  string
		value float64
	}{{"C3", 3.9e-6}, {"L1", 0.82e-3}, {"R3", 6.8}, {"C1", 22e-6}} {
		other, _ := load(t, harbour)
		if err := other.SetPart(c.part, c.value); err != nil {
			t.Fatal(err)
		}
		sys, err := sim.New(other, nil)
		if err != nil {
			t.Fatal(err)
		}
		file, rec := renderTones(t, d, sys, audioio.Settings{})
		v := verify(t, nominal, file, rec)
		if v.Pass || len(v.Suspects) == 0 || v.Suspects[0].Part != c.part {
			t.Errorf("%s at %g: pass %v, suspects %v", c.part, c.value, v.Pass, v.Suspects)
			continue
		}
		if got := v.Suspects[0].Estimate; math.Abs(got/c.value-1) > 1e-3 {
			t.Errorf("%s: found at %g, it is %g", c.part, got, c.value)
		}
	}
}

// What does not belong together is refused with a sentence.
func TestVerifyRefuses(t *testing.T) {
	d, sys := load(t, harbour)
	_, three := load(t, "breakwater.toml")
	file, rec := renderTones(t, d, sys, audioio.Settings{})
	for _, c := range []struct {
		name string
		sys  *sim.System
		file []byte
		rec  func(*audioio.Recording)
		want string
	}{
		{"another design", three, file.b, nil, `verify: the recording is of the ways ["low" "high"], the design has ["low" "mid" "high"]; render the design again`},
		{"cut short", sys, file.b[:len(file.b)/2], nil, "frames; render it again"},
		{"another rate", sys, file.b, func(r *audioio.Recording) { r.Rate = 44100 }, "verify: the file's rate is 48000 Hz, its schedule's is 44100 Hz; give the two that were written together"},
		{"music", sys, file.b, func(r *audioio.Recording) { r.Signal = audioio.Music }, "verify: music may leave whole bands silent"},
		{"no file", sys, nil, nil, "the file is empty"},
	} {
		r := *rec
		if c.rec != nil {
			c.rec(&r)
		}
		v, err := audioio.Verify(context.Background(), c.sys, &r, bytes.NewReader(c.file), audioio.Limits{})
		if v != nil || err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, want %q", c.name, err, c.want)
		}
	}
}

// Silence proves nothing: it fails, and no number in the answer is wrong.
func TestSilenceFails(t *testing.T) {
	d, sys := load(t, harbour)
	file, rec := renderTones(t, d, sys, audioio.Settings{})
	clear(file.b[len(file.b)-rec.LengthSamples*9:]) // 3 channels of 24 bits
	v, err := audioio.Verify(context.Background(), sys, rec, bytes.NewReader(file.b), audioio.Limits{})
	if err == nil && v.Pass {
		t.Error("silence passes")
	}
}

// An interrupt stops a rendering, and a failing disk gives its own error.
func TestRenderingStops(t *testing.T) {
	d, sys := load(t, harbour)
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	set := audioio.Settings{Progress: func(done, total int) {
		if done > total/2 {
			cancel()
		}
	}}
	if _, err := audioio.RenderTones(ctx, sys, tones(d), &tape{}, set); !errors.Is(err, context.Canceled) {
		t.Errorf("tones: %v", err)
	}
	src, err := signal.NewPink(48000, 60, rand.NewPCG(3, 4), signal.NoiseSettings{})
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel = context.WithCancel(context.Background())
	defer cancel()
	in := audioio.Input{Kind: audioio.Noise, Source: src, Rate: 48000, Volts: 4, BandHz: [2]float64{20, 20000}}
	if _, err := audioio.RenderBroadband(ctx, sys, in, &tape{}, set); !errors.Is(err, context.Canceled) {
		t.Errorf("noise: %v", err)
	}
	full := errors.New("no space left")
	if _, err := audioio.RenderBroadband(context.Background(), sys, in, &brimful{after: 100_000, err: full}, audioio.Settings{}); !errors.Is(err, full) {
		t.Errorf("a full disk: %v", err)
	}
}

// brimful fails after so many bytes.
type brimful struct {
	tape
	after int
	err   error
}

func (b *brimful) Write(p []byte) (int, error) {
	if b.after -= len(p); b.after < 0 {
		return 0, b.err
	}
	return b.tape.Write(p)
}

// A description is read back as it was written, and only if it is one.
func FuzzReadRecording(f *testing.F) {
	for _, s := range []string{
		`{"title":"a","signal":"tones","ways":["low"],"bits":24,"rate":48000,"volts_per_full_scale":4,"peak":0.5,"length_samples":14000,
		"tones":[{"frequency_hz":1000,"start_sample":0,"edge_samples":480,"settle_samples":960,"measure_samples":12000,"cycles":250}]}`,
		`{"signal":"sweep","ways":["low","high"],"rate":48000,"volts_per_full_scale":4,"length_samples":480000,"band_hz":[20,20000],"tones":[]}`,
		`{"signal":"noise"}`, `{`, ``, `[]`, `{"signal":"tones","ways":["low"],"rate":1e9}`,
	} {
		f.Add([]byte(s))
	}
	f.Fuzz(func(t *testing.T, src []byte) {
		rec, err := audioio.ReadRecording(bytes.NewReader(src))
		if err != nil {
			if rec != nil {
				t.Error("a recording and an error")
			}
			return
		}
		var once, twice bytes.Buffer
		if err := rec.Write(&once); err != nil {
			t.Fatal(err)
		}
		again, err := audioio.ReadRecording(bytes.NewReader(once.Bytes()))
		if err != nil {
			t.Fatalf("%v in %s", err, once.Bytes())
		}
		if err := again.Write(&twice); err != nil || !bytes.Equal(once.Bytes(), twice.Bytes()) {
			t.Errorf("%v: %s became %s", err, once.Bytes(), twice.Bytes())
		}
	})
}

// A mix is the mean of a file's channels, or one of them.
func TestMix(t *testing.T) {
	var file tape
	_, sys := load(t, harbour)
	if _, err := audioio.RenderTones(context.Background(), sys, []float64{1000}, &file, audioio.Settings{}); err != nil {
		t.Fatal(err)
	}
	read := func(channel int) []float64 {
		r, err := wavfile.NewReader(bytes.NewReader(file.b))
		if err != nil {
			t.Fatal(err)
		}
		m, err := audioio.NewMix(r, channel)
		if err != nil {
			t.Fatal(err)
		}
		all := make([]float64, m.Len())
		for done := 0; done < len(all); {
			n, err := m.ReadSamples(all[done:min(done+977, len(all))])
			if err != nil {
				t.Fatal(err)
			}
			done += n
		}
		if n, err := m.ReadSamples(make([]float64, 8)); n != 0 || err != io.EOF {
			t.Errorf("after the end: %d, %v", n, err)
		}
		return all
	}
	mean, one, two, three := read(0), read(1), read(2), read(3)
	for i := range mean {
		if want := (one[i] + two[i] + three[i]) / 3; math.Abs(mean[i]-want) > 1e-15 {
			t.Fatalf("sample %d: mean %g, want %g", i, mean[i], want)
		}
	}
	r, err := wavfile.NewReader(bytes.NewReader(file.b))
	if err != nil {
		t.Fatal(err)
	}
	if _, err := audioio.NewMix(r, 4); err == nil {
		t.Error("channel 4 of 3 is accepted")
	}
}
