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

// FuzzRead feeds the reader anything. It must not panic, hang or take memory that the
// input does not justify; an error is a *FormatError and comes without a reader; samples
// that were read, written with the same encoding and read again are the same.
func FuzzRead(f *testing.F) {
	for _, tt := range faults() {
		if len(tt.file) < 4096 {
			f.Add(tt.file)
		}
	}
	for _, e := range allEncodings {
		for _, channels := range []int{1, 2, 5} {
			f.Add(write(f, audio.Format{NumChannels: channels, SampleRate: 48000}, wavfile.Settings{Encoding: e}, noise(channels*7, 1)))
		}
	}
	f.Fuzz(func(t *testing.T, file []byte) {
		asFile, fileErr := fuzzRead(t, bytes.NewReader(file), len(file))
		asPipe, pipeErr := fuzzRead(t, stream{bytes.NewReader(file)}, len(file))
		// What a file gives, a pipe gives, too; a pipe can find out less, but not other samples.
		if fileErr == nil && pipeErr == nil && !slices.Equal(asFile, asPipe) {
			t.Fatalf("%d samples from a file and other %d from a pipe", len(asFile), len(asPipe))
		}
	})
}

func fuzzRead(t *testing.T, src io.Reader, size int) ([]float64, error) {
	rd, err := wavfile.NewReader(src)
	var fe *wavfile.FormatError
	if err != nil {
		if rd != nil || !errors.As(err, &fe) || fe.What == "" || fe.Mend == "" {
			t.Fatalf("reader %v, error %#v", rd, err)
		}
		return nil, err
	}
	channels := rd.Format().NumChannels
	var x []float64
	block := make([]float64, 97*channels)
	for {
		n, err := rd.ReadFrames(block)
		x = append(x, block[:n*channels]...)
		if err == io.EOF {
			break
		}
		if err != nil {
			if n != 0 || !errors.As(err, &fe) {
				t.Fatalf("%d frames, error %#v", n, err)
			}
			return nil, err
		}
		if n == 0 || len(x) > size {
			t.Fatalf("%d samples from %d bytes", len(x), size)
		}
	}
	if rd.Frames() != int64(len(x)/channels) {
		t.Fatalf("read %d frames and the file has %d", len(x)/channels, rd.Frames())
	}
	again := write(t, rd.Format(), wavfile.Settings{Encoding: rd.Encoding()}, x)
	back, y := read(t, bytes.NewReader(again))
	if back.Format() != rd.Format() || back.Encoding() != rd.Encoding() || !slices.Equal(x, y) || len(back.Warnings()) > 0 {
		t.Fatalf("written and read again it differs, warnings %q", back.Warnings())
	}
	return x, nil
}
