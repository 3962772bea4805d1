package wavfile_test

import (
	"bytes"
	"fmt"
	"io"

	"github.com/go-audio/audio"

	"sixdown/audioio/wavfile"
)

// Write two frames of two channels and read them back. The sample beyond full
// scale is clipped and counted.
func Example() {
	var file memory // stands for an *os.File
	w, err := wavfile.NewWriter(&file, audio.Format{NumChannels: 2, SampleRate: 48000}, wavfile.Settings{Encoding: wavfile.PCM16})
	if err != nil {
		fmt.Println(err)
		return
	}
	if err := w.WriteFrames([]float64{0.5, -0.5, 0.25, -1.5}); err != nil {
		fmt.Println(err)
	}
	if err := w.Close(); err != nil {
		fmt.Println(err)
	}
	fmt.Println("clipped:", w.Clipped())

	r, err := wavfile.NewReader(bytes.NewReader(file.b))
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(r.Format(), r.Encoding(), r.Frames())
	block := make([]float64, 2*1024)
	for {
		n, err := r.ReadFrames(block)
		if err == io.EOF {
			break
		}
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Println(block[:2*n])
	}
	// Output:
	// clipped: 1
	// {2 48000} 16-bit PCM 2
	// [0.5 -0.5 0.25 -1]
}

// What cannot be read is refused with a sentence.
func ExampleFormatError() {
	_, err := wavfile.NewReader(bytes.NewReader([]byte("RIFF\x04\x00\x00\x00WAVE")))
	fmt.Println(err)
	// Output:
	// wav: byte 12: the file ends before its fmt chunk; copy the file again from where it came
}
