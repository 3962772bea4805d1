package wavfile

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"

	"github.com/go-audio/audio"
)

// Format tags of the fmt chunk.
const (
	tagPCM        = 0x0001
	tagFloat      = 0x0003
	tagExtensible = 0xFFFE
)

// guidTail follows the format tag in the sub-format of an extensible header:
// tttt0000-0000-0010-8000-00AA00389B71 in the byte order of the file.
const guidTail = "\x00\x00\x00\x00\x10\x00\x80\x00\x00\xaa\x00\x38\x9b\x71"

const (
	maxChannels = 64
	maxRate     = 10_000_000 // Hz; far above any converter, so above it is a broken header

	sizeStreamed    = 0xFFFFFFFF // also: see ds64
	sizeStreamedSox = 0x7FFFF000 // what another common writer leaves in a pipe's header
)

// header is what stands before the samples.
type header struct {
	format   audio.Format
	encoding Encoding
	mask     uint32
	dataAt   int64 // of the first sample, bytes from the beginning of the file
	dataSize int64 // bytes, or unknown
	warnings []string
}

const warnStreamed = "the header's size was never filled in; read to the end of the file"

func (h *header) warnf(format string, args ...any) {
	h.warnings = append(h.warnings, fmt.Sprintf(format, args...))
}

// readHeader walks the chunk table up to the first sample.
func readHeader(in *bytesIn) (*header, error) {
	h := new(header)
	riffSize, is64, err := readRIFF(in)
	if err != nil {
		return nil, err
	}
	long := int64(unknown) // the data size in ds64
	seenFmt, seenDS64 := false, false
	for range maxChunks {
		c, err := in.nextChunk()
		if err != nil {
			if !errors.Is(err, io.EOF) {
				return nil, fmt.Errorf("wav: byte %d: %w", in.pos, err)
			}
			if !seenFmt {
				return nil, faultAt(in.pos, mendRecopy, "the file ends before its fmt chunk")
			}
			return nil, faultAt(in.pos, mendNoSound, "the file ends before its data chunk")
		}
		switch {
		case c.id == "data":
			if !seenFmt {
				return nil, faultAt(c.at-8, mendExport, "the data chunk stands before the fmt chunk, so the samples' format is not known")
			}
			h.dataAt = c.at
			h.setDataSize(in, c, riffSize, is64 && seenDS64, long)
			return h, nil
		case c.size > in.left():
			return nil, faultAt(c.at-4, mendRecopy, "chunk %q is said to have %d bytes and the file has %d left", c.id, c.size, in.left())
		case c.id == "fmt " && seenFmt:
			return nil, faultAt(c.at-8, mendExport, "there is a second fmt chunk")
		case c.id == "fmt ":
			if err := h.readFmt(in, c); err != nil {
				return nil, err
			}
			seenFmt = true
		case c.id == "ds64" && is64:
			if long, err = readDS64(in, c); err != nil {
				return nil, err
			}
			seenDS64 = true
		}
		if err := in.skipChunk(c); err != nil && !errors.Is(err, io.EOF) {
			return nil, fmt.Errorf("wav: byte %d: %w", in.pos, err)
		}
	}
	return nil, faultAt(in.pos, mendExport, "there is no data chunk among the first %d chunks", maxChunks)
}

// readRIFF reads the first twelve bytes; is64 tells a file that may be longer than 4 GB.
func readRIFF(in *bytesIn) (riffSize int64, is64 bool, err error) {
	var b [12]byte
	n, err := in.read(b[:])
	if err != nil && !errors.Is(err, io.EOF) {
		return 0, false, fmt.Errorf("wav: byte %d: %w", in.pos, err)
	}
	switch {
	case n == 0:
		return 0, false, faultAt(0, mendRecopy, "the file is empty")
	case n < len(b):
		return 0, false, faultAt(int64(n), mendRecopy, "the file ends within its first %d bytes", len(b))
	}
	switch id := string(b[:4]); id {
	case "RIFF":
	case "RF64", "BW64":
		is64 = true
	case "RIFX", "FFIR":
		return 0, false, faultAt(0, mendExport, "the numbers are in big-endian order (%s)", id)
	case "FORM":
		return 0, false, faultAt(0, mendExport, "this is an AIFF file")
	case "fLaC", "OggS":
		return 0, false, faultAt(0, mendExport, "this is a compressed sound file (%s)", id)
	default:
		return 0, false, faultAt(0, "give a WAV file", "this is not a WAV file: it begins with %q", id)
	}
	if form := string(b[8:]); form != "WAVE" {
		return 0, false, faultAt(8, "give a WAV file", "the RIFF file holds %q and not sound", form)
	}
	return int64(binary.LittleEndian.Uint32(b[4:])), is64, nil
}

// readDS64 returns the size of the data chunk from an RF64 file's ds64 chunk.
func readDS64(in *bytesIn, c chunk) (int64, error) {
	var b [16]byte // riff size, data size
	if c.size < int64(len(b)) {
		return 0, faultAt(c.at-4, mendExport, "the ds64 chunk has %d bytes and needs 28", c.size)
	}
	if _, err := in.read(b[:]); err != nil {
		return 0, fileEnded(in, "ds64", err)
	}
	size := binary.LittleEndian.Uint64(b[8:])
	if size == 0 || size > math.MaxInt64/2 {
		return unknown, nil
	}
	return int64(size), nil
}

func fileEnded(in *bytesIn, id string, err error) error {
	if errors.Is(err, io.EOF) {
		return faultAt(in.pos, mendRecopy, "the file ends within its %s chunk", id)
	}
	return fmt.Errorf("wav: byte %d: %w", in.pos, err)
}

// readFmt reads the format of the samples.
func (h *header) readFmt(in *bytesIn, c chunk) error {
	var b [40]byte
	if c.size < 16 {
		return faultAt(c.at-4, mendExport, "the fmt chunk has %d bytes and needs 16", c.size)
	}
	n := min(c.size, int64(len(b)))
	if _, err := in.read(b[:n]); err != nil {
		return fileEnded(in, "fmt", err)
	}
	var (
		tag      = binary.LittleEndian.Uint16(b[0:])
		channels = int(binary.LittleEndian.Uint16(b[2:]))
		rate     = int64(binary.LittleEndian.Uint32(b[4:]))
		align    = int(binary.LittleEndian.Uint16(b[12:]))
		bits     = int(binary.LittleEndian.Uint16(b[14:]))
	)
	if tag == tagExtensible {
		if n < int64(len(b)) {
			return faultAt(c.at-4, mendExport, "the fmt chunk says it is extensible, has %d bytes and needs 40", c.size)
		}
		h.mask = binary.LittleEndian.Uint32(b[20:])
		tag = binary.LittleEndian.Uint16(b[24:])
		if string(b[26:]) != guidTail {
			return faultAt(c.at+24, mendExport, "the sub-format %x is neither PCM nor float", b[24:])
		}
	}
	if channels < 1 || channels > maxChannels {
		return faultAt(c.at+2, fmt.Sprintf("export the file again with 1 to %d channels", maxChannels), "the file says that it has %d channels", channels)
	}
	if rate < 1 || rate > maxRate {
		return faultAt(c.at+4, mendRecord, "the sample rate is said to be %d Hz", rate)
	}
	h.encoding = encodingOf(tag, bits)
	if h.encoding == 0 {
		return faultAt(c.at, mendExport, "the samples are %s, which this program does not read", tagName(tag, bits))
	}
	frame := channels * h.encoding.bytes()
	switch align {
	case frame:
	case 0:
		h.warnf("the frame size in the header is 0 bytes; taken as %d", frame)
	default:
		// Samples might lie at either end of a wider container: a wrong guess is
		// a wrong level by 48 dB, so there is no guess.
		return faultAt(c.at+12, mendExport, "a frame is said to have %d bytes, and %d channels of %d bits take %d", align, channels, bits, frame)
	}
	h.format = audio.Format{NumChannels: channels, SampleRate: int(rate)}
	return nil
}

// encodingOf returns 0 for what cannot be read. PCM of a size between whole
// bytes lies in the upper bits of the next whole one and reads as that.
func encodingOf(tag uint16, bits int) Encoding {
	switch {
	case tag == tagFloat && bits == 32:
		return Float32
	case tag == tagFloat && bits == 64:
		return Float64
	case tag == tagPCM && bits >= 1 && bits <= 32:
		e, err := PCM((bits + 7) / 8 * 8)
		if err != nil {
			return 0
		}
		return e
	}
	return 0
}

func tagName(tag uint16, bits int) string {
	names := map[uint16]string{
		tagPCM: "PCM", tagFloat: "float", 0x0002: "ADPCM", 0x0006: "A-law",
		0x0007: "µ-law", 0x0011: "IMA ADPCM", 0x0050: "MPEG", 0x0055: "MP3",
	}
	if name, ok := names[tag]; ok {
		return fmt.Sprintf("%d-bit %s", bits, name)
	}
	return fmt.Sprintf("of format 0x%04X", tag)
}

// setDataSize decides how many bytes of samples there are: as many as the
// header says, unless the file has fewer or the header was never completed.
func (h *header) setDataSize(in *bytesIn, c chunk, riffSize int64, is64 bool, long int64) {
	size, streamed := c.size, false
	switch {
	case is64 && (c.size == sizeStreamed || c.size == 0):
		size, streamed = long, long == unknown
	case c.size == sizeStreamed || c.size == sizeStreamedSox:
		streamed = c.size > in.left() || in.left() == unknown
	case c.size == 0:
		// Empty, or not filled in? If the RIFF size was not filled in either,
		// or ends here while more follows, it is the latter.
		streamed = in.left() > 0 && (riffSize == sizeStreamed || riffSize+8 <= c.at)
	}
	if streamed {
		if h.dataSize = in.left(); h.dataSize != unknown {
			h.warnf(warnStreamed)
		}
		return
	}
	h.dataSize = size
	if left := in.left(); size > left {
		h.warnf("the file ends early: its header promises %d bytes of sound and %d are there", size, left)
		h.dataSize = left
	}
}
