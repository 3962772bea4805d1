package wavfile_test

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"github.com/go-audio/audio"

	"sixdown/audioio/wavfile"
)

var allEncodings = []wavfile.Encoding{
	wavfile.PCM8, wavfile.PCM16, wavfile.PCM24, wavfile.PCM32, wavfile.Float32, wavfile.Float64,
}

// memory is a file in memory.
type memory struct {
	b  []byte
	at int64
}

func (m *memory) Write(p []byte) (int, error) {
	if need := m.at + int64(len(p)); need > int64(len(m.b)) {
		m.b = append(m.b, make([]byte, need-int64(len(m.b)))...)
	}
	copy(m.b[m.at:], p)
	m.at += int64(len(p))
	return len(p), nil
}

func (m *memory) Seek(offset int64, whence int) (int64, error) {
	switch whence {
	case io.SeekCurrent:
		offset += m.at
	case io.SeekEnd:
		offset += int64(len(m.b))
	}
	m.at = offset
	return m.at, nil
}

// write returns a complete file.
func write(t testing.TB, format audio.Format, s wavfile.Settings, frames []float64) []byte {
	t.Helper()
	var m memory
	w, err := wavfile.NewWriter(&m, format, s)
	if err != nil {
		t.Fatal(err)
	}
	if err := w.WriteFrames(frames); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return m.b
}

// read returns all samples.
func read(t testing.TB, r io.Reader) (*wavfile.Reader, []float64) {
	t.Helper()
	rd, err := wavfile.NewReader(r)
	if err != nil {
		t.Fatal(err)
	}
	buf, err := wavfile.ReadAll(rd, 1<<24)
	if err != nil {
		t.Fatal(err)
	}
	return rd, buf.Data
}

// noise returns samples in ±1, among them the extremes and zero.
func noise(n int, seed uint64) []float64 {
	r := rand.New(rand.NewPCG(seed, 0))
	x := make([]float64, n)
	for i := range x {
		x[i] = 2*r.Float64() - 1
	}
	copy(x, []float64{-1, 0, 1, -1.0 / 32768, 0.5})
	return x
}

// stream hides a reader's Seek.
type stream struct{ io.Reader }

func TestRoundTrip(t *testing.T) {
	for _, e := range allEncodings {
		// Half a step, and up to a whole one just below +1, which has no code.
		tol := 1 / math.Ldexp(1, e.Bits()-1)
		switch e {
		case wavfile.Float32:
			tol = 0x1p-25 // half a unit in the last place below 1
		case wavfile.Float64:
			tol = 0
		}
		for _, channels := range []int{1, 2, 3, 4, 7, 64} {
			for _, frames := range []int{0, 1, 5, 1001} {
				t.Run(fmt.Sprintf("%v/%d channels/%d frames", e, channels, frames), func(t *testing.T) {
					format := audio.Format{NumChannels: channels, SampleRate: 44100}
					x := noise(max(frames*channels, 5), 1)[:frames*channels]
					file := write(t, format, wavfile.Settings{Encoding: e}, x)
					for _, src := range []io.Reader{bytes.NewReader(file), stream{bytes.NewReader(file)}} {
						rd, got := read(t, src)
						if rd.Format() != format || rd.Encoding() != e || rd.Frames() != int64(frames) || len(rd.Warnings()) > 0 {
							t.Fatalf("got %v, %v, %d frames, warnings %q", rd.Format(), rd.Encoding(), rd.Frames(), rd.Warnings())
						}
						if len(got) != len(x) {
							t.Fatalf("got %d samples, want %d", len(got), len(x))
						}
						for i := range x {
							half := tol / 2
							if x[i] > 1-tol || e.IsFloat() {
								half = tol
							}
							if d := math.Abs(got[i] - x[i]); !(d <= half) {
								t.Fatalf("sample %d: wrote %v, read %v", i, x[i], got[i])
							}
						}
					}
				})
			}
		}
	}
}

// Codes from the definition: a b-bit file holds two's complement integers
// (8 bits: offset binary), IBM/Microsoft 1991; full scale 2^(b−1); derived by hand.
func TestCodes(t *testing.T) {
	x := []float64{-1, -0.5, 0, 0.5, 1, 1.5, -2}
	tests := []struct {
		e       wavfile.Encoding
		want    []byte
		clipped int64
	}{
		{wavfile.PCM8, []byte{0, 64, 128, 192, 255, 255, 0}, 2},
		{wavfile.PCM16, le16(-32768, -16384, 0, 16384, 32767, 32767, -32768), 2},
		{wavfile.PCM24, []byte{0, 0, 0x80, 0, 0, 0xC0, 0, 0, 0, 0, 0, 0x40, 0xFF, 0xFF, 0x7F, 0xFF, 0xFF, 0x7F, 0, 0, 0x80}, 2},
		{wavfile.PCM32, []byte{0, 0, 0, 0x80, 0, 0, 0, 0xC0, 0, 0, 0, 0, 0, 0, 0, 0x40, 0xFF, 0xFF, 0xFF, 0x7F, 0xFF, 0xFF, 0xFF, 0x7F, 0, 0, 0, 0x80}, 2},
		// IEEE 754: −1 is BF800000, 1.5 is 3FC00000; nothing clips.
		{wavfile.Float32, []byte{0, 0, 0x80, 0xBF, 0, 0, 0, 0xBF, 0, 0, 0, 0, 0, 0, 0, 0x3F, 0, 0, 0x80, 0x3F, 0, 0, 0xC0, 0x3F, 0, 0, 0, 0xC0}, 0},
	}
	for _, tt := range tests {
		t.Run(tt.e.String(), func(t *testing.T) {
			var m memory
			w, err := wavfile.NewWriter(&m, audio.Format{NumChannels: 1, SampleRate: 48000}, wavfile.Settings{Encoding: tt.e})
			if err != nil {
				t.Fatal(err)
			}
			if err := w.WriteFrames(x); err != nil {
				t.Fatal(err)
			}
			if err := w.Close(); err != nil {
				t.Fatal(err)
			}
			at := bytes.LastIndex(m.b, []byte("data")) + 8
			if got := m.b[at : at+len(tt.want)]; !bytes.Equal(got, tt.want) {
				t.Errorf("stored % x\n  want % x", got, tt.want)
			}
			if w.Clipped() != tt.clipped {
				t.Errorf("clipped %d, want %d", w.Clipped(), tt.clipped)
			}
		})
	}
}

func le16(v ...int16) []byte {
	var b []byte
	for _, x := range v {
		b = binary.LittleEndian.AppendUint16(b, uint16(x))
	}
	return b
}

// Rounding is to the nearest code: every 16-bit code, and the points a little
// below and above the middle between it and the next, land where they must.
func TestRoundsToNearest(t *testing.T) {
	var x []float64
	var want []int16
	for c := -32768; c < 32767; c++ {
		x = append(x, float64(c)/32768, (float64(c)+0.4999)/32768, (float64(c)+0.5001)/32768)
		want = append(want, int16(c), int16(c), int16(c+1))
	}
	file := write(t, audio.Format{NumChannels: 1, SampleRate: 8000}, wavfile.Settings{Encoding: wavfile.PCM16}, x)
	if !bytes.Equal(file[44:], le16(want...)) {
		t.Error("a sample was not rounded to its nearest code")
	}
}

// The block length must not show: any way of cutting the stream gives the
// same samples, and nothing is written past the frames returned.
func TestBlockLengths(t *testing.T) {
	format := audio.Format{NumChannels: 3, SampleRate: 48000}
	x := noise(3*20011, 2)
	for _, e := range allEncodings {
		whole := write(t, format, wavfile.Settings{Encoding: e}, x)
		_, want := read(t, bytes.NewReader(whole))
		for _, block := range []int{1, 7, 64, 479, 4096, 1 << 16} {
			var m, planar memory
			w, err := wavfile.NewWriter(&m, format, wavfile.Settings{Encoding: e})
			if err != nil {
				t.Fatal(err)
			}
			pw, err := wavfile.NewWriter(&planar, format, wavfile.Settings{Encoding: e})
			if err != nil {
				t.Fatal(err)
			}
			for rest := x; len(rest) > 0; {
				n := min(block, len(rest)/3)
				planes := [][]float64{make([]float64, n), make([]float64, n), make([]float64, n)}
				for i := range n {
					for c := range planes {
						planes[c][i] = rest[3*i+c]
					}
				}
				if err := errors.Join(w.WriteFrames(rest[:3*n]), pw.WriteChannels(planes)); err != nil {
					t.Fatal(err)
				}
				rest = rest[3*n:]
			}
			if err := errors.Join(w.Close(), pw.Close()); err != nil {
				t.Fatal(err)
			}
			if !bytes.Equal(m.b, whole) || !bytes.Equal(planar.b, whole) {
				t.Fatalf("%v: written in blocks of %d the file differs", e, block)
			}
			got := checkReader(t, bytes.NewReader(whole), block)
			if !slices.Equal(got, want) {
				t.Fatalf("%v: read in blocks of %d the samples differ", e, block)
			}
		}
	}
}

// checkReader reads r to its end both ways, guarding what must not be touched.
func checkReader(t *testing.T, file io.ReadSeeker, block int) []float64 {
	t.Helper()
	rd, err := wavfile.NewReader(file)
	if err != nil {
		t.Fatal(err)
	}
	channels := rd.Format().NumChannels
	const guard = 1e300
	dst := make([]float64, block*channels+channels-1) // not a whole number of frames, on purpose
	var got []float64
	for {
		for i := range dst {
			dst[i] = guard
		}
		n, err := rd.ReadFrames(dst)
		for _, v := range dst[n*channels:] {
			if v != guard {
				t.Fatal("written past the frames returned")
			}
		}
		got = append(got, dst[:n*channels]...)
		if err == io.EOF {
			if n != 0 {
				t.Fatal("frames together with io.EOF")
			}
			break
		}
		if err != nil {
			t.Fatal(err)
		}
	}
	if n, err := rd.ReadFrames(dst); n != 0 || err != io.EOF {
		t.Fatalf("after the end: %d, %v", n, err)
	}
	if err := rd.SeekFrame(0); err != nil {
		t.Fatal(err)
	}
	planes := make([][]float64, channels)
	for c := range planes {
		planes[c] = make([]float64, block)
	}
	for at := 0; ; {
		n, err := rd.ReadChannels(planes)
		for i := range n {
			for c := range planes {
				if planes[c][i] != got[(at+i)*channels+c] {
					t.Fatal("ReadChannels and ReadFrames differ")
				}
			}
		}
		at += n
		if err == io.EOF {
			if at != len(got)/channels {
				t.Fatalf("ReadChannels gave %d frames, ReadFrames %d", at, len(got)/channels)
			}
			return got
		}
		if err != nil {
			t.Fatal(err)
		}
	}
}

func TestSeekFrame(t *testing.T) {
	format := audio.Format{NumChannels: 2, SampleRate: 48000}
	file := write(t, format, wavfile.Settings{}, noise(2*50000, 3))
	_, all := read(t, bytes.NewReader(file))
	rd, err := wavfile.NewReader(bytes.NewReader(file))
	if err != nil {
		t.Fatal(err)
	}
	dst := make([]float64, 10)
	for _, frame := range []int64{40000, 3, 49995, 0, 12345, 12347} {
		if err := rd.SeekFrame(frame); err != nil {
			t.Fatal(err)
		}
		n, err := rd.ReadFrames(dst)
		if n != 5 || err != nil || !slices.Equal(dst, all[2*frame:2*frame+10]) {
			t.Errorf("at frame %d: %d frames, %v", frame, n, err)
		}
		if rd.Frames() != 50000 {
			t.Errorf("after going to frame %d the file has %d frames", frame, rd.Frames())
		}
	}
	if rd.SeekFrame(-1) == nil || rd.SeekFrame(50001) == nil {
		t.Error("went to a frame that is not there")
	}
	piped, err := wavfile.NewReader(stream{bytes.NewReader(file)})
	if err != nil {
		t.Fatal(err)
	}
	if piped.SeekFrame(0) == nil {
		t.Error("went back in a pipe")
	}
}

// A WAV file may lie inside another file; both ends begin where they stand.
func TestBeginsWhereItStands(t *testing.T) {
	path := filepath.Join(t.TempDir(), "inside")
	f, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if _, err := f.WriteString("seven b"); err != nil {
		t.Fatal(err)
	}
	w, err := wavfile.NewWriter(f, audio.Format{NumChannels: 1, SampleRate: 8000}, wavfile.Settings{Encoding: wavfile.PCM8})
	if err != nil {
		t.Fatal(err)
	}
	if err := errors.Join(w.WriteFrames([]float64{0, 0.5, -0.5}), w.Close()); err != nil {
		t.Fatal(err)
	}
	if _, err := f.WriteString("behind"); err != nil {
		t.Fatal(err)
	}
	if _, err := f.Seek(7, io.SeekStart); err != nil {
		t.Fatal(err)
	}
	if _, got := read(t, f); !slices.Equal(got, []float64{0, 0.5, -0.5}) {
		t.Errorf("read %v", got)
	}
}

// Triangular dither of one step: the error has mean 0 and variance 1/4 step²
// whatever the signal (Lipshitz, Wannamaker and Vanderkooy 1992: 1/12 of the
// rounding, twice 1/12 of the two uniform variates). Over n samples the mean
// spreads by 0.5/√n and the variance by less than 0.25·√(2/n); four of each is allowed.
func TestDither(t *testing.T) {
	const n = 200_000
	for _, level := range []float64{0, 0.25, 0.5, 0.9} { // in steps, between two codes
		x := make([]float64, n)
		for i := range x {
			x[i] = level / 32768
		}
		file := write(t, audio.Format{NumChannels: 1, SampleRate: 48000},
			wavfile.Settings{Encoding: wavfile.PCM16, Dither: rand.NewPCG(1, 2)}, x)
		_, got := read(t, bytes.NewReader(file))
		var sum, square float64
		for i := range got {
			d := (got[i] - x[i]) * 32768
			sum += d
			square += d * d
		}
		if mean := sum / n; math.Abs(mean) > 4*0.5/math.Sqrt(n) {
			t.Errorf("level %v: mean error %.5f steps", level, mean)
		}
		if v := square / n; math.Abs(v-0.25) > 4*0.25*math.Sqrt(2.0/n) {
			t.Errorf("level %v: error variance %.5f steps², want 0.25", level, v)
		}
	}
	// Dither must not push full scale round to the other sign, nor count as clipping.
	full := slices.Repeat([]float64{1, -1}, 1000)
	var m memory
	w, err := wavfile.NewWriter(&m, audio.Format{NumChannels: 1, SampleRate: 48000},
		wavfile.Settings{Encoding: wavfile.PCM16, Dither: rand.NewPCG(1, 2)})
	if err != nil {
		t.Fatal(err)
	}
	if err := errors.Join(w.WriteFrames(full), w.Close()); err != nil {
		t.Fatal(err)
	}
	if w.Clipped() != 0 {
		t.Errorf("clipped %d of samples at ±1", w.Clipped())
	}
	_, got := read(t, bytes.NewReader(m.b))
	for i := range got {
		if math.Abs(got[i]-full[i]) > 3.0/32768 {
			t.Fatalf("full scale %v became %v", full[i], got[i])
		}
	}
}

func TestRefusesWhatCannotBeStored(t *testing.T) {
	for _, tt := range []struct {
		e wavfile.Encoding
		x float64
	}{
		{wavfile.PCM24, math.NaN()}, {wavfile.PCM16, math.Inf(1)}, {wavfile.Float32, math.Inf(-1)},
		{wavfile.Float32, 1e39}, {wavfile.Float64, math.NaN()},
	} {
		var m memory
		w, err := wavfile.NewWriter(&m, audio.Format{NumChannels: 2, SampleRate: 48000}, wavfile.Settings{Encoding: tt.e})
		if err != nil {
			t.Fatal(err)
		}
		if err := w.WriteFrames([]float64{0.5, 0.5, 0.5, tt.x}); err == nil {
			t.Errorf("%v took %v", tt.e, tt.x)
		}
		if err := w.WriteChannels([][]float64{{0.5, tt.x}, {0.5, 0.5}}); err == nil {
			t.Errorf("%v took %v", tt.e, tt.x)
		}
		if err := errors.Join(w.WriteFrames([]float64{0.25, 0.25}), w.Close()); err != nil {
			t.Fatal(err)
		}
		if _, got := read(t, bytes.NewReader(m.b)); !slices.Equal(got, []float64{0.25, 0.25}) {
			t.Errorf("%v: the refused block left traces: %v", tt.e, got)
		}
	}
}

func TestNewWriterRefuses(t *testing.T) {
	for _, tt := range []struct {
		format audio.Format
		e      wavfile.Encoding
	}{
		{audio.Format{NumChannels: 0, SampleRate: 48000}, 0},
		{audio.Format{NumChannels: 65, SampleRate: 48000}, 0},
		{audio.Format{NumChannels: 1, SampleRate: 0}, 0},
		{audio.Format{NumChannels: 1, SampleRate: 1 << 30}, 0},
		{audio.Format{NumChannels: 1, SampleRate: 48000}, 99},
	} {
		var m memory
		if w, err := wavfile.NewWriter(&m, tt.format, wavfile.Settings{Encoding: tt.e}); err == nil || w != nil || len(m.b) > 0 {
			t.Errorf("%+v, %v: taken", tt.format, tt.e)
		}
	}
	if _, err := wavfile.PCM(20); err == nil {
		t.Error("PCM(20) taken")
	}
}

func TestAllocatesNothing(t *testing.T) {
	format := audio.Format{NumChannels: 4, SampleRate: 48000}
	x := noise(4*4096, 4)
	planes := [][]float64{x[:4096], x[4096:8192], x[8192:12288], x[12288:]}
	for _, e := range allEncodings {
		w, err := wavfile.NewWriter(discard{}, format, wavfile.Settings{Encoding: e, Dither: rand.NewPCG(1, 2)})
		if err != nil {
			t.Fatal(err)
		}
		if n := testing.AllocsPerRun(20, func() {
			if err := errors.Join(w.WriteFrames(x), w.WriteChannels(planes)); err != nil {
				t.Fatal(err)
			}
		}); n != 0 {
			t.Errorf("%v: writing a block allocates %v times", e, n)
		}
		rd, err := wavfile.NewReader(bytes.NewReader(write(t, format, wavfile.Settings{Encoding: e}, x)))
		if err != nil {
			t.Fatal(err)
		}
		dst := make([]float64, 4*64)
		if n := testing.AllocsPerRun(20, func() {
			if _, err := rd.ReadFrames(dst); err != nil {
				t.Fatal(err)
			}
		}); n != 0 {
			t.Errorf("%v: reading a block allocates %v times", e, n)
		}
	}
}

// discard takes everything and keeps nothing.
type discard struct{}

func (discard) Write(p []byte) (int, error)                  { return len(p), nil }
func (discard) Seek(offset int64, whence int) (int64, error) { return 0, nil }

func BenchmarkWrite(b *testing.B) {
	for _, e := range allEncodings {
		b.Run(e.String(), func(b *testing.B) {
			x := noise(4*4096, 5)
			w, err := wavfile.NewWriter(discard{}, audio.Format{NumChannels: 4, SampleRate: 48000}, wavfile.Settings{Encoding: e})
			if err != nil {
				b.Fatal(err)
			}
			b.SetBytes(int64(len(x) * e.Bits() / 8))
			b.ReportAllocs()
			var frames int64
			for b.Loop() {
				if frames += 4096; frames > 60_000_000 {
					b.StopTimer() // a file holds 4 GB: begin another
					if w, err = wavfile.NewWriter(discard{}, audio.Format{NumChannels: 4, SampleRate: 48000}, wavfile.Settings{Encoding: e}); err != nil {
						b.Fatal(err)
					}
					frames = 0
					b.StartTimer()
				}
				if err := w.WriteFrames(x); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkRead(b *testing.B) {
	for _, e := range allEncodings {
		b.Run(e.String(), func(b *testing.B) {
			x := noise(4*48000, 6)
			file := write(b, audio.Format{NumChannels: 4, SampleRate: 48000}, wavfile.Settings{Encoding: e}, x)
			rd, err := wavfile.NewReader(bytes.NewReader(file))
			if err != nil {
				b.Fatal(err)
			}
			dst := make([]float64, 4*4096)
			b.SetBytes(int64(len(x) * e.Bits() / 8))
			b.ReportAllocs()
			for b.Loop() {
				if err := rd.SeekFrame(0); err != nil {
					b.Fatal(err)
				}
				for {
					if _, err := rd.ReadFrames(dst); err == io.EOF {
						break
					} else if err != nil {
						b.Fatal(err)
					}
				}
			}
		})
	}
}
