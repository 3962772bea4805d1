package wavfile

import (
	"errors"
	"fmt"
	"io"

	"github.com/go-audio/audio"
)

// readBuffer is the size of the read buffer in bytes: large against the cost
// of a system call, small against the processor's cache.
const readBuffer = 64 << 10

// Reader reads the frames of a WAV file one block after another.
type Reader struct {
	in   *bytesIn
	h    *header
	raw  []byte // room for whole frames
	at   int64  // frames delivered or skipped so far
	left int64  // bytes of samples not yet read, or unknown
	err  error  // sticks
}

// NewReader reads the header of the WAV file in r and stands at its first frame.
// A source that can seek need not stand at its beginning; the file begins where it stands.
// A file that cannot be read gives a *[FormatError]; a source that fails gives its own error, wrapped.
func NewReader(r io.Reader) (*Reader, error) {
	in := newBytesIn(r)
	h, err := readHeader(in)
	if err != nil {
		return nil, err
	}
	frame := h.format.NumChannels * h.encoding.bytes()
	rd := &Reader{in: in, h: h, raw: make([]byte, readBuffer/frame*frame), left: h.dataSize}
	if h.dataSize != unknown {
		if rest := h.dataSize % int64(frame); rest != 0 {
			h.warnf("the last frame is incomplete (%d of %d bytes); left out", rest, frame)
			rd.left -= rest
		}
	}
	return rd, nil
}

// Format returns the number of channels and the sample rate in Hz.
func (r *Reader) Format() audio.Format { return r.h.format }

// Encoding returns how the samples are stored.
func (r *Reader) Encoding() Encoding { return r.h.encoding }

// ChannelMask returns the loudspeaker positions of the channels as the file
// states them, or 0.
func (r *Reader) ChannelMask() uint32 { return r.h.mask }

// Frames returns the number of frames in the file, or −1 where neither the
// header nor the source can tell. From a source that cannot seek it is what the
// header promises, until the end has been read.
func (r *Reader) Frames() int64 {
	if r.left == unknown {
		return -1
	}
	return r.at + r.left/int64(r.frame())
}

// Warnings returns what was wrong with the file and read over, a sentence each.
// It is complete once the end has been read.
func (r *Reader) Warnings() []string { return append([]string(nil), r.h.warnings...) }

// ReadFrames stores interleaved samples in dst, full scale ±1, and returns how
// many frames it stored: as many as fit, fewer only at the end or at an error.
// At the end it returns 0 and io.EOF, again and again. It allocates nothing and
// writes nothing past the frames returned. A sample that is not a number is
// a *[FormatError]. A dst shorter than a frame gives io.ErrShortBuffer.
func (r *Reader) ReadFrames(dst []float64) (int, error) {
	channels := r.h.format.NumChannels
	if len(dst) < channels {
		return 0, io.ErrShortBuffer
	}
	done := 0
	for want := len(dst) / channels; done < want; {
		raw, err := r.next(want - done)
		if err != nil {
			if done > 0 {
				return done, nil
			}
			return 0, err
		}
		n := len(raw) / r.frame()
		decode(r.h.encoding, dst[done*channels:(done+n)*channels], raw, r.h.encoding.bytes())
		done += n
	}
	return done, nil
}

// ReadChannels is ReadFrames with one slice a channel, all of the same length.
// It panics if there are not as many slices as channels or their lengths differ.
func (r *Reader) ReadChannels(dst [][]float64) (int, error) {
	want := checkChannels(dst, r.h.format.NumChannels)
	if want == 0 {
		return 0, io.ErrShortBuffer
	}
	done := 0
	for done < want {
		raw, err := r.next(want - done)
		if err != nil {
			if done > 0 {
				return done, nil
			}
			return 0, err
		}
		n := len(raw) / r.frame()
		for c := range dst {
			decode(r.h.encoding, dst[c][done:done+n], raw[c*r.h.encoding.bytes():], r.frame())
		}
		done += n
	}
	return done, nil
}

// SeekFrame goes to a frame, counted from 0; reading goes on there, also after
// the end has been reached. It needs a source that can seek.
func (r *Reader) SeekFrame(frame int64) error {
	if r.in.seek == nil {
		return errors.New("wav: seek: the source cannot go back or forth; give a file and not a pipe")
	}
	frames := r.Frames()
	if frame < 0 || frame > frames {
		return fmt.Errorf("wav: seek: there is no frame %d; the file has %d", frame, frames)
	}
	if err := r.in.moveTo(r.h.dataAt + frame*int64(r.frame())); err != nil {
		r.err = fmt.Errorf("wav: seek: %w", err)
		return r.err
	}
	r.at, r.left, r.err = frame, (frames-frame)*int64(r.frame()), nil
	return nil
}

// frame returns the size of a frame in bytes.
func (r *Reader) frame() int { return r.h.format.NumChannels * r.h.encoding.bytes() }

// next returns the bytes of 1 to want frames, good until the next call, or an error.
func (r *Reader) next(want int) ([]byte, error) {
	if r.err != nil {
		return nil, r.err
	}
	frame := r.frame()
	size := min(int64(len(r.raw)), int64(want)*int64(frame), r.left)
	if size == 0 {
		r.err = io.EOF
		return nil, r.err
	}
	raw := r.raw[:size]
	n, err := r.in.read(raw)
	if r.left != unknown {
		r.left -= int64(n)
	}
	if err != nil {
		r.end(n, err)
	}
	raw = raw[:n/frame*frame]
	if good := finite(r.h.encoding, raw) / r.h.format.NumChannels; good*frame < len(raw) {
		r.err = faultAt(r.in.pos-int64(n)+int64(good*frame), mendRecord, "a sample of frame %d is not a finite number", r.at+int64(good))
		raw = raw[:good*frame]
	}
	r.at += int64(len(raw) / frame)
	if len(raw) == 0 {
		return nil, r.err
	}
	return raw, nil
}

// end notes why reading stops after n more bytes.
func (r *Reader) end(n int, err error) {
	if !errors.Is(err, io.EOF) {
		r.err = fmt.Errorf("wav: byte %d: %w", r.in.pos, err)
		return
	}
	r.err = io.EOF
	if rest := n % r.frame(); rest != 0 {
		r.h.warnf("the last frame is incomplete (%d of %d bytes); left out", rest, r.frame())
	}
	switch {
	case r.left != unknown:
		r.h.warnf("the file ends early: %d bytes of sound that its header promises are missing", r.left)
	case r.at > 0 || n > 0: // else it was empty, and 0 the right size
		r.h.warnf(warnStreamed)
	}
	r.left = 0
}

// checkChannels returns the common length of the slices.
func checkChannels(planes [][]float64, channels int) int {
	if len(planes) != channels {
		panic(fmt.Sprintf("wavfile: %d slices for %d channels", len(planes), channels))
	}
	for _, p := range planes {
		if len(p) != len(planes[0]) {
			panic("wavfile: slices of different lengths")
		}
	}
	return len(planes[0])
}
