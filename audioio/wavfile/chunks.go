package wavfile

import (
	"bufio"
	"encoding/binary"
	"errors"
	"io"
	"math"
)

const (
	// unknown stands for a size that cannot be known: the source cannot seek,
	// or the file was written by a program that could not go back and fill it in.
	unknown = math.MaxInt64

	// maxChunks bounds the walk to the data chunk, so that a file made of
	// empty chunks cannot keep the reader busy. Real files have below a dozen.
	maxChunks = 1000
)

// bytesIn is a source of bytes that knows where it stands and, if it can seek,
// how much there is.
type bytesIn struct {
	r    *bufio.Reader
	seek io.Seeker // nil where the source cannot seek
	base int64     // where the seeker stood at byte 0 of the file
	pos  int64     // bytes from the beginning of the file
	size int64     // of the file in bytes, or unknown
}

// newBytesIn finds out whether r can seek by trying: a pipe has the method, too.
func newBytesIn(r io.Reader) *bytesIn {
	in := &bytesIn{r: bufio.NewReaderSize(r, 4096), size: unknown}
	s, ok := r.(io.Seeker)
	if !ok {
		return in
	}
	base, err := s.Seek(0, io.SeekCurrent)
	if err != nil {
		return in
	}
	end, err := s.Seek(0, io.SeekEnd)
	if err != nil {
		return in
	}
	if _, err := s.Seek(base, io.SeekStart); err != nil || end < base {
		return in
	}
	in.seek, in.base, in.size = s, base, end-base
	return in
}

// left returns how many bytes follow, or unknown.
func (in *bytesIn) left() int64 {
	if in.size == unknown {
		return unknown
	}
	return max(in.size-in.pos, 0)
}

// read fills p as far as the source goes; err is nil, io.EOF or the source's own.
func (in *bytesIn) read(p []byte) (int, error) {
	n, err := io.ReadFull(in.r, p)
	in.pos += int64(n)
	if errors.Is(err, io.ErrUnexpectedEOF) {
		err = io.EOF
	}
	return n, err
}

// moveTo goes to a byte at or behind the present one or, if the source can
// seek, to any.
func (in *bytesIn) moveTo(pos int64) error {
	if n := pos - in.pos; n >= 0 && (in.seek == nil || n <= int64(in.r.Buffered())) {
		m, err := io.CopyN(io.Discard, in.r, n)
		in.pos += m
		return err
	}
	if _, err := in.seek.Seek(in.base+pos, io.SeekStart); err != nil {
		return err
	}
	in.r.Reset(in.seek.(io.Reader))
	in.pos = pos
	return nil
}

// chunk is one entry of the chunk table.
type chunk struct {
	id   string // four characters
	at   int64  // of the first byte of its content
	size int64  // as the file states it
}

func (c chunk) end() int64 { return c.at + c.size }

// nextChunk reads a chunk's id and size. It returns io.EOF where the file ends.
func (in *bytesIn) nextChunk() (chunk, error) {
	var head [8]byte
	if _, err := in.read(head[:]); err != nil {
		return chunk{}, err
	}
	return chunk{
		id:   string(head[:4]),
		at:   in.pos,
		size: int64(binary.LittleEndian.Uint32(head[4:])),
	}, nil
}

// skipChunk goes to the chunk that follows c. Content of odd size is followed
// by a pad byte, which some programs leave out; the next chunk's id tells.
func (in *bytesIn) skipChunk(c chunk) error {
	if err := in.moveTo(c.end()); err != nil || c.size%2 == 0 {
		return err
	}
	b, err := in.r.Peek(5)
	if err != nil {
		return nil // too little left for a chunk: the next read tells the end
	}
	if idLikeness(b[:4]) > idLikeness(b[1:5]) {
		return nil
	}
	return in.moveTo(in.pos + 1)
}

// idLikeness ranks four bytes: 2 for the id of a chunk often seen in WAV files,
// 1 for any printable id, 0 for what cannot be one.
func idLikeness(b []byte) int {
	switch string(b) {
	case "fmt ", "data", "fact", "LIST", "JUNK", "junk", "bext", "PEAK", "cue ", "smpl", "iXML", "ds64":
		return 2
	}
	for _, c := range b {
		if c < ' ' || c > '~' {
			return 0
		}
	}
	return 1
}
