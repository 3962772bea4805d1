package wavfile

import (
	"fmt"
	"io"

	"github.com/go-audio/audio"
)

// ReadBuffer is ReadFrames for code that passes go-audio's buffers: it fills
// buf.Data as far as it goes, shortens it to the frames read and sets buf.Format.
func (r *Reader) ReadBuffer(buf *audio.FloatBuffer) (int, error) {
	n, err := r.ReadFrames(buf.Data)
	buf.Data = buf.Data[:n*r.h.format.NumChannels]
	if err == nil && buf.Format == nil {
		buf.Format = new(audio.Format)
	}
	if err == nil {
		*buf.Format = r.h.format
	}
	return n, err
}

// WriteBuffer is WriteFrames for code that passes go-audio's buffers. The
// buffer must have the file's format and a whole number of frames.
func (w *Writer) WriteBuffer(buf *audio.FloatBuffer) error {
	if buf == nil || buf.Format == nil || *buf.Format != w.format || len(buf.Data)%w.format.NumChannels != 0 {
		return fmt.Errorf("wav: write: the buffer does not have the file's %d channels at %d Hz in whole frames; convert it first",
			w.format.NumChannels, w.format.SampleRate)
	}
	return w.WriteFrames(buf.Data)
}

// ReadAll returns all that is left of r as one buffer. It suits short files:
// memory grows with what is read, never with what the header promises, and more
// than maxFrames frames are refused.
func ReadAll(r *Reader, maxFrames int) (*audio.FloatBuffer, error) {
	format := r.Format()
	buf := &audio.FloatBuffer{Format: &format}
	block := make([]float64, 4096*format.NumChannels)
	for {
		n, err := r.ReadFrames(block)
		if len(buf.Data)/format.NumChannels+n > maxFrames {
			return nil, fmt.Errorf("wav: read: the file has more than %d frames; give a shorter one", maxFrames)
		}
		buf.Data = append(buf.Data, block[:n*format.NumChannels]...)
		if err == io.EOF {
			return buf, nil
		}
		if err != nil {
			return nil, err
		}
	}
}
