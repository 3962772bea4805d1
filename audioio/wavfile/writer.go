package wavfile

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"math/rand/v2"

	"github.com/go-audio/audio"
)

// writeBuffer is the size of the write buffer in bytes.
const writeBuffer = 64 << 10

// maxRIFF is the greatest RIFF size: one below 0xFFFFFFFF, which means "not known".
const maxRIFF = math.MaxUint32 - 1

// Settings are what a file to be written can choose. The zero value is 24-bit PCM.
type Settings struct {
	// Encoding of the samples; zero is PCM24.
	Encoding Encoding

	// ChannelMask tells the loudspeaker position of each channel, a bit each. Zero
	// is front centre for one channel, front left and right for two, and for
	// more none: the channels of a measurement are no loudspeaker positions. It is
	// written where the header has room for it (more than 2 channels or 16 bits of PCM).
	ChannelMask uint32

	// Dither supplies triangular dither of one step to 8-bit and 16-bit files;
	// nil is no dither. The other encodings ignore it: their step lies below
	// the noise of any converter.
	Dither rand.Source
}

// Writer writes the frames of a WAV file one block after another. [Writer.Close] completes the file.
type Writer struct {
	w         io.WriteSeeker
	base      int64 // where w stood at byte 0 of the file
	format    audio.Format
	encoding  Encoding
	dither    rand.Source
	header    []byte
	raw       []byte // room for whole frames
	used      int    // bytes of raw waiting to be written
	frames    int64
	maxFrames int64
	clipped   int64
	err       error // sticks
	closed    bool
}

// NewWriter writes a header to w and returns a Writer for frames of
// format.NumChannels samples, 1 to 64, at format.SampleRate Hz. Until Close the
// header says "size not known", so a file cut short can still be read.
func NewWriter(w io.WriteSeeker, format audio.Format, s Settings) (*Writer, error) {
	if format.NumChannels < 1 || format.NumChannels > maxChannels {
		return nil, fmt.Errorf("wav: write: %d channels; ask for 1 to %d", format.NumChannels, maxChannels)
	}
	if format.SampleRate < 1 || format.SampleRate > maxRate {
		return nil, fmt.Errorf("wav: write: a sample rate of %d Hz; ask for 1 to %d", format.SampleRate, maxRate)
	}
	if s.Encoding == 0 {
		s.Encoding = PCM24
	}
	if s.Encoding.bytes() == 0 {
		return nil, fmt.Errorf("wav: write: %v is no encoding; ask for PCM24 or another of the constants", s.Encoding)
	}
	base, err := w.Seek(0, io.SeekCurrent)
	if err != nil {
		return nil, fmt.Errorf("wav: write: the sizes in the header need going back, give a file and not a pipe: %w", err)
	}
	frame := format.NumChannels * s.Encoding.bytes()
	wr := &Writer{
		w: w, base: base, format: format, encoding: s.Encoding, dither: s.Dither,
		header: newHeader(format, s),
		raw:    make([]byte, writeBuffer/frame*frame),
	}
	// One byte of padding may have to fit, too.
	wr.maxFrames = (maxRIFF - int64(len(wr.header)-8) - 1) / int64(frame)
	if _, err := w.Write(wr.header); err != nil {
		return nil, fmt.Errorf("wav: write: %w", err)
	}
	return wr, nil
}

// newHeader returns everything before the first sample, with unknown sizes.
func newHeader(format audio.Format, s Settings) []byte {
	var (
		le      = binary.LittleEndian
		width   = s.Encoding.bytes()
		frame   = format.NumChannels * width
		isFloat = s.Encoding.IsFloat()
		// "Multiple Channel Audio Data and WAVE Files" asks for the extensible form
		// above two channels and for PCM above 16 bits.
		extensible = format.NumChannels > 2 || (!isFloat && width > 2)
		tag        = uint16(tagPCM)
		fmtSize    = uint32(16)
	)
	if isFloat {
		tag, fmtSize = tagFloat, 18
	}
	wFormatTag := tag
	if extensible {
		wFormatTag, fmtSize = tagExtensible, 40
	}
	b := append([]byte(nil), "RIFF\xff\xff\xff\xffWAVEfmt "...)
	b = le.AppendUint32(b, fmtSize)
	b = le.AppendUint16(b, wFormatTag)
	b = le.AppendUint16(b, uint16(format.NumChannels))
	b = le.AppendUint32(b, uint32(format.SampleRate))
	b = le.AppendUint32(b, uint32(min(int64(format.SampleRate)*int64(frame), math.MaxUint32)))
	b = le.AppendUint16(b, uint16(frame))
	b = le.AppendUint16(b, uint16(8*width))
	switch {
	case extensible:
		b = le.AppendUint16(b, 22) // bytes that follow in this chunk
		b = le.AppendUint16(b, uint16(8*width))
		b = le.AppendUint32(b, channelMask(format.NumChannels, s.ChannelMask))
		b = le.AppendUint16(b, tag)
		b = append(b, guidTail...)
	case isFloat:
		b = le.AppendUint16(b, 0)
	}
	if hasFact(b) {
		b = append(b, "fact\x04\x00\x00\x00\xff\xff\xff\xff"...)
	}
	return append(b, "data\xff\xff\xff\xff"...)
}

// hasFact tells whether a header has a fact chunk with the number of frames: every
// format tag other than plain PCM asks for one (IBM and Microsoft 1991).
func hasFact(header []byte) bool {
	return binary.LittleEndian.Uint16(header[20:]) != tagPCM
}

func channelMask(channels int, asked uint32) uint32 {
	switch {
	case asked != 0:
		return asked
	case channels == 1:
		return 0x4
	case channels == 2:
		return 0x3
	}
	return 0
}

// WriteFrames writes interleaved samples, full scale ±1, a whole number of frames.
// It allocates nothing and does not keep src. Integer encodings clip what lies
// outside ±1 and count it ([Writer.Clipped]). Samples that are not finite, and
// frames beyond the 4 GB that a WAV file can hold, are refused before anything
// of src is written. After an error of the underlying writer that error sticks.
func (w *Writer) WriteFrames(src []float64) error {
	channels := w.format.NumChannels
	if len(src)%channels != 0 {
		panic(fmt.Sprintf("wavfile: %d samples are no whole number of frames of %d channels", len(src), channels))
	}
	n := len(src) / channels
	if err := w.admit(n); err != nil {
		return err
	}
	if good := storable(w.encoding, src); good < len(src) {
		return w.notStorable(good/channels, good%channels, src[good])
	}
	width := w.encoding.bytes()
	for len(src) > 0 {
		dst, m, err := w.room(len(src) / channels)
		if err != nil {
			return err
		}
		w.clipped += encode(w.encoding, dst, width, src[:m*channels], w.dither)
		src = src[m*channels:]
	}
	return nil
}

// WriteChannels is WriteFrames with one slice a channel, all of the same length.
// It panics if there are not as many slices as channels or their lengths differ.
func (w *Writer) WriteChannels(src [][]float64) error {
	n := checkChannels(src, w.format.NumChannels)
	if err := w.admit(n); err != nil {
		return err
	}
	for c, plane := range src {
		if good := storable(w.encoding, plane); good < n {
			return w.notStorable(good, c, plane[good])
		}
	}
	width := w.encoding.bytes()
	frame := width * w.format.NumChannels
	for from := 0; from < n; {
		dst, m, err := w.room(n - from)
		if err != nil {
			return err
		}
		for c, plane := range src {
			w.clipped += encode(w.encoding, dst[c*width:], frame, plane[from:from+m], w.dither)
		}
		from += m
	}
	return nil
}

// Frames returns how many frames have been written.
func (w *Writer) Frames() int64 { return w.frames }

// Admit tells before anything is written whether that many frames will fit into the file.
func (w *Writer) Admit(frames int64) error {
	if frames > w.maxFrames {
		return fmt.Errorf("wav: write: %.0f s would be longer than the 4 GB that a WAV file can hold, here %.0f s; make it shorter, or write several",
			float64(frames)/float64(w.format.SampleRate), float64(w.maxFrames)/float64(w.format.SampleRate))
	}
	return nil
}

// Clipped returns how many samples lay outside ±1 and were clipped. Float
// encodings hold such samples as they are, so for them it is 0.
func (w *Writer) Clipped() int64 { return w.clipped }

// Close writes what is still waiting and completes the header. It does not
// close the underlying writer. Closing again returns the first outcome.
func (w *Writer) Close() error {
	if w.closed {
		return w.err
	}
	w.closed = true
	if w.flush() != nil {
		return w.err
	}
	size := w.frames * int64(w.format.NumChannels*w.encoding.bytes())
	pad := size % 2
	if pad == 1 {
		if _, err := w.w.Write([]byte{0}); err != nil {
			return w.fail(err)
		}
	}
	le, h := binary.LittleEndian, w.header
	le.PutUint32(h[4:], uint32(int64(len(h)-8)+size+pad))
	le.PutUint32(h[len(h)-4:], uint32(size))
	if hasFact(h) {
		le.PutUint32(h[len(h)-12:], uint32(w.frames))
	}
	if _, err := w.w.Seek(w.base, io.SeekStart); err != nil {
		return w.fail(err)
	}
	if _, err := w.w.Write(h); err != nil {
		return w.fail(err)
	}
	if _, err := w.w.Seek(w.base+int64(len(h))+size+pad, io.SeekStart); err != nil {
		return w.fail(err)
	}
	return nil
}

// admit says whether n more frames can be taken.
func (w *Writer) admit(n int) error {
	if w.closed {
		return errors.New("wav: write: the file is complete; open another for more")
	}
	if w.err != nil {
		return w.err
	}
	if int64(n) > w.maxFrames-w.frames {
		return fmt.Errorf("wav: write: a WAV file cannot be longer than 4 GB, here %.0f s; make it shorter, or write several",
			float64(w.maxFrames)/float64(w.format.SampleRate))
	}
	return nil
}

func (w *Writer) notStorable(frame, channel int, x float64) error {
	return fmt.Errorf("wav: write: frame %d, channel %d is %v, which %v cannot hold; look for its cause upstream",
		w.frames+int64(frame), channel+1, x, w.encoding)
}

// room returns space for m of the n frames still to come, 1 ≤ m ≤ n, and counts them as written.
func (w *Writer) room(n int) (dst []byte, m int, err error) {
	if w.used == len(w.raw) {
		if err := w.flush(); err != nil {
			return nil, 0, err
		}
	}
	frame := w.format.NumChannels * w.encoding.bytes()
	dst = w.raw[w.used:]
	m = min(n, len(dst)/frame)
	w.used += m * frame
	w.frames += int64(m)
	return dst[:m*frame], m, nil
}

func (w *Writer) flush() error {
	if w.err != nil || w.used == 0 {
		return w.err
	}
	n := w.used
	w.used = 0
	if _, err := w.w.Write(w.raw[:n]); err != nil {
		return w.fail(err)
	}
	return nil
}

func (w *Writer) fail(err error) error {
	w.err = fmt.Errorf("wav: write: %w", err)
	return w.err
}
