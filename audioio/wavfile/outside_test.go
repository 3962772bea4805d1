package wavfile_test

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/go-audio/audio"
	"github.com/go-audio/wav"

	"sixdown/audioio/wavfile"
)

// needs returns the path of an outside program. Where it is absent the test is
// skipped, except on the build machine, which must have it.
func needs(t *testing.T, program string) string {
	t.Helper()
	path, err := exec.LookPath(program)
	if err == nil {
		return path
	}
	if os.Getenv("CI") != "" {
		t.Fatalf("%s is not installed on the build machine", program)
	}
	t.Skipf("%s is not installed", program)
	return ""
}

// sine returns four cycles, each channel at another level and phase.
func sine(format audio.Format, frames int) []float64 {
	x := make([]float64, frames*format.NumChannels)
	for i := range frames {
		for c := range format.NumChannels {
			x[i*format.NumChannels+c] = 0.9 / float64(c+1) * math.Sin(2*math.Pi*float64(4*i)/float64(frames)+float64(c))
		}
	}
	return x
}

var shapes = []audio.Format{
	{NumChannels: 1, SampleRate: 44100}, {NumChannels: 2, SampleRate: 48000},
	{NumChannels: 3, SampleRate: 96000}, {NumChannels: 4, SampleRate: 48000}, {NumChannels: 8, SampleRate: 192000},
}

// eachFile calls f with a file of every encoding and shape, with an odd number of frames.
func eachFile(t *testing.T, f func(t *testing.T, e wavfile.Encoding, format audio.Format, x []float64, file []byte)) {
	for _, e := range allEncodings {
		for _, format := range shapes {
			t.Run(fmt.Sprintf("%v/%d channels", e, format.NumChannels), func(t *testing.T) {
				x := sine(format, 4411)
				s := wavfile.Settings{Encoding: e}
				if format.NumChannels > 2 {
					// Left to itself the mask is 0, "no positions" (KSAUDIO_SPEAKER_DIRECTOUT),
					// which is right for a measurement, but sndfile-info says that it should not be.
					s.ChannelMask = 1<<format.NumChannels - 1
				}
				f(t, e, format, x, write(t, format, s, x))
			})
		}
	}
}

// go-audio/wav reads every PCM file: right format, every sample the nearest code.
func TestGoAudioReadsWhatWeWrite(t *testing.T) {
	eachFile(t, func(t *testing.T, e wavfile.Encoding, format audio.Format, x []float64, file []byte) {
		if e == wavfile.Float64 {
			return // "unhandled byte depth": that decoder does not know it
		}
		d := wav.NewDecoder(bytes.NewReader(file))
		if !d.IsValidFile() {
			t.Fatal("no valid file")
		}
		if int(d.SampleRate) != format.SampleRate || int(d.NumChans) != format.NumChannels || int(d.BitDepth) != e.Bits() {
			t.Fatalf("%d Hz, %d channels, %d bits", d.SampleRate, d.NumChans, d.BitDepth)
		}
		buf := &audio.IntBuffer{Data: make([]int, len(x)+8), Format: &audio.Format{}}
		n, err := d.PCMBuffer(buf)
		if err != nil {
			t.Fatal(err)
		}
		if n < len(x) || n > len(x)+1 { // it takes the pad byte for a sample
			t.Fatalf("%d samples, want %d", n, len(x))
		}
		for i, v := range x {
			got, want := buf.Data[i], int(math.RoundToEven(math.Ldexp(v, e.Bits()-1)))
			switch e {
			case wavfile.PCM8:
				want += 128
			case wavfile.Float32: // it hands out the bits
				want = int(int32(math.Float32bits(float32(v))))
			}
			if got != want {
				t.Fatalf("sample %d is %d, want %d", i, got, want)
			}
		}
	})
}

// We read what go-audio/wav writes: plain tag 1 headers whatever the width.
func TestReadsWhatGoAudioWrites(t *testing.T) {
	for _, bits := range []int{8, 16, 24, 32} {
		for _, format := range shapes {
			x := sine(format, 441)
			ints := make([]int, len(x))
			for i, v := range x {
				ints[i] = int(math.RoundToEven(math.Ldexp(v, bits-1)))
				if bits == 8 {
					ints[i] += 128
				}
			}
			var m memory
			enc := wav.NewEncoder(&m, format.SampleRate, bits, format.NumChannels, 1)
			if err := enc.Write(&audio.IntBuffer{Data: ints, Format: &format, SourceBitDepth: bits}); err != nil {
				t.Fatal(err)
			}
			if err := enc.Close(); err != nil {
				t.Fatal(err)
			}
			rd, got := read(t, bytes.NewReader(m.b))
			if rd.Format() != format || rd.Encoding().Bits() != bits || len(got) != len(x) {
				t.Fatalf("%d bits: %v, %v, %d samples of %d", bits, rd.Format(), rd.Encoding(), len(got), len(x))
			}
			for i, v := range x {
				if math.Abs(got[i]-v) > math.Ldexp(0.5, 1-bits) {
					t.Fatalf("%d bits: sample %d is %v, want %v", bits, i, got[i], v)
				}
			}
		}
	}
}

// sndfile-info finds nothing to complain about in any file: no fact chunk or extensible
// header missing, sizes exact.
func TestSndfileInfoHasNoComplaints(t *testing.T) {
	program := needs(t, "sndfile-info")
	dir := t.TempDir()
	eachFile(t, func(t *testing.T, e wavfile.Encoding, format audio.Format, x []float64, file []byte) {
		path := filepath.Join(dir, "x.wav")
		if err := os.WriteFile(path, file, 0o600); err != nil {
			t.Fatal(err)
		}
		b, err := exec.Command(program, path).CombinedOutput()
		out := string(b)
		if err != nil {
			t.Fatalf("%v\n%s", err, out)
		}
		for _, want := range []string{
			fmt.Sprintf("Sample Rate : %d\n", format.SampleRate),
			fmt.Sprintf("Frames      : %d\n", len(x)/format.NumChannels),
			fmt.Sprintf("Channels    : %d\n", format.NumChannels),
		} {
			if !strings.Contains(out, want) {
				t.Errorf("no %q in\n%s", want, out)
			}
		}
		// RIFF allows a chunk of odd size if a pad byte follows, and here one does; the
		// program remarks on the size alone.
		if len(file)%2 != 0 {
			t.Error("the file has an odd length")
		}
		out = strings.ReplaceAll(out, "*** 'data' chunk should be an even number of bytes in length.", "")
		for _, bad := range []string{"***", "should", "warning", "Warning", "Error", "error", "(max", "too "} {
			if strings.Contains(out, bad) {
				t.Errorf("%q in\n%s", bad, out)
			}
		}
	})
}

// sox decodes every file to the samples written, and says nothing about it.
func TestSoxReadsWhatWeWrite(t *testing.T) {
	program := needs(t, "sox")
	dir := t.TempDir()
	eachFile(t, func(t *testing.T, e wavfile.Encoding, format audio.Format, x []float64, file []byte) {
		path := filepath.Join(dir, "x.wav")
		if err := os.WriteFile(path, file, 0o600); err != nil {
			t.Fatal(err)
		}
		var stdout, stderr bytes.Buffer
		cmd := exec.Command(program, "-D", path, "-t", "raw", "-e", "float", "-b", "64", "-L", "-")
		cmd.Stdout, cmd.Stderr = &stdout, &stderr
		if err := cmd.Run(); err != nil {
			t.Fatalf("%v\n%s", err, &stderr)
		}
		// In an extensible header of full length sox 14.4.2 still looks for the two bytes
		// that end a plain float header; sndfile-info counts all 40 bytes and is content.
		if e.IsFloat() && format.NumChannels > 2 {
			stderr.Reset()
		}
		if stderr.Len() > 0 {
			t.Errorf("sox says: %s", &stderr)
		}
		got := float64s(stdout.Bytes())
		if len(got) != len(x) {
			t.Fatalf("%d samples, want %d", len(got), len(x))
		}
		tol := soxTolerance(e)
		for i, v := range x {
			if math.Abs(got[i]-v) > tol {
				t.Fatalf("sample %d is %v, want %v", i, got[i], v)
			}
		}
	})
}

// We read what sox writes, to a file and through a pipe, where it leaves sizes open.
func TestReadsWhatSoxWrites(t *testing.T) {
	program := needs(t, "sox")
	for _, tt := range []struct {
		args string
		e    wavfile.Encoding
	}{
		{"-e unsigned -b 8", wavfile.PCM8}, {"-e signed -b 16", wavfile.PCM16}, {"-e signed -b 24", wavfile.PCM24},
		{"-e signed -b 32", wavfile.PCM32}, {"-e float -b 32", wavfile.Float32}, {"-e float -b 64", wavfile.Float64},
	} {
		for _, channels := range []int{1, 2, 5} {
			// An even number of frames: behind a pipe nothing tells a pad byte from a sample.
			// The raw reference and the file come from one recipe: sox's own sine, without dither.
			recipe := func(out ...string) []byte {
				args := append([]string{"-D", "-r", "48000", "-c", fmt.Sprint(channels), "-n"}, out...)
				args = append(args, "synth", "1002s", "sine", "997", "vol", "0.7")
				b, err := exec.Command(program, args...).Output()
				if err != nil {
					t.Fatal(err)
				}
				return b
			}
			want := float64s(recipe("-t", "raw", "-e", "float", "-b", "64", "-L", "-"))
			path := filepath.Join(t.TempDir(), "x.wav")
			recipe(append(strings.Fields(tt.args), path)...)
			onDisk, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			for how, file := range map[string][]byte{"file": onDisk, "pipe": recipe(append(strings.Fields(tt.args), "-t", "wav", "-")...)} {
				rd, got := read(t, bytes.NewReader(file))
				if rd.Encoding() != tt.e || len(got) != len(want) {
					t.Fatalf("%s, %s: %v, %d samples of %d", tt.args, how, rd.Encoding(), len(got), len(want))
				}
				if warned := len(rd.Warnings()) > 0; warned != (how == "pipe") {
					t.Errorf("%s, %s: warnings %q", tt.args, how, rd.Warnings())
				}
				tol := soxTolerance(tt.e)
				for i := range want {
					if math.Abs(got[i]-want[i]) > tol {
						t.Fatalf("%s, %s: sample %d is %v, want %v", tt.args, how, i, got[i], want[i])
					}
				}
			}
		}
	}
}

// soxTolerance is half a step of the file, and one of sox's own 32-bit integers.
func soxTolerance(e wavfile.Encoding) float64 {
	switch e {
	case wavfile.Float32:
		return 0x1p-25 + 0x1p-31
	case wavfile.Float64:
		return 0x1p-31
	}
	return math.Ldexp(0.5, 1-e.Bits()) + 0x1p-31
}

func float64s(raw []byte) []float64 {
	x := make([]float64, len(raw)/8)
	for i := range x {
		x[i] = math.Float64frombits(binary.LittleEndian.Uint64(raw[8*i:]))
	}
	return x
}

// Dither takes the harmonics out of a faint tone's rounding (Lipshitz, Wannamaker and
// Vanderkooy 1992): at 1.3 steps of amplitude the third harmonic of plain rounding stands
// out, and with dither it drowns in noise of 0.5 step rms, 0.5·√(4/n) in one bin.
func TestDitherRemovesHarmonics(t *testing.T) {
	const n, cycles = 1 << 16, 101
	x := make([]float64, n)
	for i := range x {
		x[i] = 1.3 / 32768 * math.Sin(2*math.Pi*cycles*float64(i)/n)
	}
	third := func(s wavfile.Settings) float64 {
		s.Encoding = wavfile.PCM16
		_, y := read(t, bytes.NewReader(write(t, audio.Format{NumChannels: 1, SampleRate: 48000}, s, x)))
		var re, im float64
		for i, v := range y {
			re += v * 32768 * math.Cos(2*math.Pi*3*cycles*float64(i)/n)
			im += v * 32768 * math.Sin(2*math.Pi*3*cycles*float64(i)/n)
		}
		return 2 / float64(n) * math.Hypot(re, im)
	}
	noise := 0.5 * math.Sqrt(4.0/n)
	if plain := third(wavfile.Settings{}); plain < 20*noise {
		t.Errorf("without dither the third harmonic is %.4f steps; the test shows nothing", plain)
	}
	if dithered := third(wavfile.Settings{Dither: rand.NewPCG(1, 2)}); dithered > 4*noise {
		t.Errorf("with dither the third harmonic is %.4f steps, noise is %.4f", dithered, noise)
	}
}
