package wavfile_test

import (
	"bytes"
	"errors"
	"io"
	"slices"
	"testing"

	"github.com/go-audio/audio"

	"sixdown/audioio/wavfile"
)

func TestBuffers(t *testing.T) {
	format := audio.Format{NumChannels: 2, SampleRate: 48000}
	var m memory
	w, err := wavfile.NewWriter(&m, format, wavfile.Settings{Encoding: wavfile.Float64})
	if err != nil {
		t.Fatal(err)
	}
	x := noise(2*100, 1)
	if err := errors.Join(w.WriteBuffer(&audio.FloatBuffer{Format: &format, Data: x}), w.Close()); err != nil {
		t.Fatal(err)
	}
	for name, wrong := range map[string]*audio.FloatBuffer{
		"nothing": nil, "no format": {Data: x}, "half a frame": {Format: &format, Data: x[:3]},
		"other channels": {Format: &audio.Format{NumChannels: 1, SampleRate: 48000}, Data: x},
		"other rate":     {Format: &audio.Format{NumChannels: 2, SampleRate: 44100}, Data: x},
	} {
		if w.WriteBuffer(wrong) == nil {
			t.Errorf("%s: written", name)
		}
	}
	rd, err := wavfile.NewReader(bytes.NewReader(m.b))
	if err != nil {
		t.Fatal(err)
	}
	buf := &audio.FloatBuffer{Data: make([]float64, 2*64)}
	var got []float64
	for {
		n, err := rd.ReadBuffer(buf)
		if n != buf.NumFrames() {
			t.Fatalf("%d frames, and the buffer says %d", n, buf.NumFrames())
		}
		got = append(got, buf.Data...)
		if err == io.EOF {
			break
		}
		if err != nil || *buf.Format != format {
			t.Fatal(err, buf.Format)
		}
	}
	if !slices.Equal(got, x) {
		t.Error("the samples differ")
	}
	if rd, err = wavfile.NewReader(bytes.NewReader(m.b)); err != nil {
		t.Fatal(err)
	}
	if buf, err := wavfile.ReadAll(rd, 99); err == nil || buf != nil {
		t.Error("read 100 frames where 99 were allowed")
	}
}

// Masks by "Multiple Channel Audio Data and WAVE Files", 2001: front centre is bit 2, front
// left and right bits 0 and 1; none for the channels of a measurement.
func TestChannelMask(t *testing.T) {
	for _, tt := range []struct {
		channels    int
		asked, want uint32
	}{{1, 0, 0x4}, {2, 0, 0x3}, {3, 0, 0}, {8, 0, 0}, {4, 0x33, 0x33}} {
		file := write(t, audio.Format{NumChannels: tt.channels, SampleRate: 48000}, wavfile.Settings{ChannelMask: tt.asked}, nil)
		rd, err := wavfile.NewReader(bytes.NewReader(file))
		if err != nil {
			t.Fatal(err)
		}
		if rd.ChannelMask() != tt.want {
			t.Errorf("%d channels, %#x asked: mask %#x, want %#x", tt.channels, tt.asked, rd.ChannelMask(), tt.want)
		}
	}
}

// A slip of the programmer panics, as the doc comments say; misuse over time is an error.
func TestMisuse(t *testing.T) {
	var m memory
	w, err := wavfile.NewWriter(&m, audio.Format{NumChannels: 2, SampleRate: 48000}, wavfile.Settings{})
	if err != nil {
		t.Fatal(err)
	}
	for name, slip := range map[string]func() error{
		"half a frame":      func() error { return w.WriteFrames(make([]float64, 3)) },
		"one slice for two": func() error { return w.WriteChannels(make([][]float64, 1)) },
		"unequal slices":    func() error { return w.WriteChannels([][]float64{make([]float64, 2), make([]float64, 3)}) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			if err := slip(); err != nil {
				t.Errorf("%s: %v", name, err)
			}
		}()
	}
	if err := errors.Join(w.Close(), w.Close()); err != nil {
		t.Error(err)
	}
	if w.WriteFrames(make([]float64, 2)) == nil || w.WriteChannels([][]float64{{0}, {0}}) == nil {
		t.Error("written to a complete file")
	}
	rd, err := wavfile.NewReader(bytes.NewReader(m.b))
	if err != nil {
		t.Fatal(err)
	}
	if _, err := rd.ReadFrames(make([]float64, 1)); err != io.ErrShortBuffer {
		t.Errorf("half a frame of room: %v", err)
	}
	if _, err := rd.ReadChannels(make([][]float64, 2)); err != io.ErrShortBuffer {
		t.Errorf("no room: %v", err)
	}
}
