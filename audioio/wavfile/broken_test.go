package wavfile_test

import (
	"bytes"
	"encoding/binary"
	"errors"
	"io"
	"math"
	"runtime"
	"slices"
	"strings"
	"testing"

	"github.com/go-audio/audio"

	"sixdown/audioio/wavfile"
)

// The files below are put together chunk by chunk, each named for its fault.

func le32(v uint32) []byte { return binary.LittleEndian.AppendUint32(nil, v) }
func le64(v uint64) []byte { return binary.LittleEndian.AppendUint64(nil, v) }

func join(parts ...[]byte) []byte { return bytes.Join(parts, nil) }

// sized is a chunk whose header states a size of its own.
func sized(id string, size uint32, content []byte) []byte {
	return join([]byte(id), le32(size), content)
}

// part is a right chunk, padded.
func part(id string, content []byte) []byte {
	b := sized(id, uint32(len(content)), content)
	if len(content)%2 == 1 {
		b = append(b, 0)
	}
	return b
}

// riff is a file of the given form with a right RIFF size.
func riff(id string, chunks ...[]byte) []byte {
	body := join(chunks...)
	return join([]byte(id), le32(uint32(len(body)+4)), []byte("WAVE"), body)
}

// format16 is the content of a 16-byte fmt chunk.
func format16(tag, channels uint16, rate uint32, align, bits uint16) []byte {
	var b []byte
	b = binary.LittleEndian.AppendUint16(b, tag)
	b = binary.LittleEndian.AppendUint16(b, channels)
	b = binary.LittleEndian.AppendUint32(b, rate)
	b = binary.LittleEndian.AppendUint32(b, rate*uint32(align))
	b = binary.LittleEndian.AppendUint16(b, align)
	return binary.LittleEndian.AppendUint16(b, bits)
}

// extensible is the content of a 40-byte fmt chunk.
func extensible(channels, align, bits, valid uint16, guid string) []byte {
	b := format16(0xFFFE, channels, 48000, align, bits)
	b = binary.LittleEndian.AppendUint16(b, 22)
	b = binary.LittleEndian.AppendUint16(b, valid)
	b = append(b, le32(0)...)
	return append(b, guid...)
}

const (
	guidPCM   = "\x01\x00\x00\x00\x00\x00\x10\x00\x80\x00\x00\xaa\x00\x38\x9b\x71"
	guidFloat = "\x03\x00\x00\x00\x00\x00\x10\x00\x80\x00\x00\xaa\x00\x38\x9b\x71"
)

// fault is a hand-made file and what must come of it.
type fault struct {
	name string
	file []byte

	// Either err is part of the refusal, or want are the samples in 32768ths and warn is
	// part of the one warning ("" is none).
	err  string
	want []float64
	warn string

	fileOnly bool // a pipe cannot tell this fault before its end
}

// faults returns the hand-made files. Mono 16-bit samples 1, 2, 3 unless the name says otherwise.
func faults() []fault {
	mono := part("fmt ", format16(1, 1, 48000, 2, 16))
	sound := part("data", le16(1, 2, 3))
	ok := []float64{1, 2, 3}
	big := uint32(0xFFFFFFFE)
	list := []byte("INFOISFT\x05\x00\x00\x00sound\x00")
	right := riff("RIFF", mono, sound)

	return []fault{
		{name: "right", file: right, want: ok},
		{name: "empty file", err: "empty"},
		{name: "one byte", file: []byte("R"), err: "ends within its first 12 bytes"},
		{name: "RIFF and nothing", file: []byte("RIFF\x04\x00\x00\x00WAVE"), err: "before its fmt chunk"},
		{name: "AVI form", file: append([]byte("RIFF\x04\x00\x00\x00AVI "), right[12:]...), err: `holds "AVI "`},
		{name: "big-endian", file: append([]byte("RIFX"), right[4:]...), err: "big-endian"},
		{name: "AIFF", file: append([]byte("FORM"), right[4:]...), err: "AIFF"},
		{name: "FLAC", file: append([]byte("fLaC"), right[4:]...), err: "compressed"},
		{name: "text", file: []byte("frequency;level\n100;2.5\n"), err: "not a WAV file"},
		{name: "header cut in fmt", file: right[:30], err: "16 bytes and the file has 10", fileOnly: true},
		{name: "header cut before data", file: right[:36], err: "before its data chunk"},
		{name: "header cut in data's size", file: right[:42], err: "before its data chunk"},
		{name: "no fmt", file: riff("RIFF", sound), err: "before the fmt chunk"},
		{name: "fmt behind data", file: riff("RIFF", sound, mono), err: "before the fmt chunk"},
		{name: "two fmt", file: riff("RIFF", mono, mono, sound), err: "second fmt"},
		{name: "fmt of 14 bytes", file: riff("RIFF", part("fmt ", format16(1, 1, 48000, 2, 16)[:14]), sound), err: "14 bytes and needs 16"},
		{name: "fmt of 18 bytes", file: riff("RIFF", part("fmt ", append(format16(1, 1, 48000, 2, 16), 0, 0)), sound), want: ok},
		{name: "fmt of 1000 bytes", file: riff("RIFF", part("fmt ", append(format16(1, 1, 48000, 2, 16), make([]byte, 984)...)), sound), want: ok},
		{name: "fmt of 4 GB", file: riff("RIFF", sized("fmt ", big, format16(1, 1, 48000, 2, 16)), sound), err: "4294967294 bytes", fileOnly: true},
		{name: "fmt of 4 GB, odd", file: riff("RIFF", sized("fmt ", 0xFFFFFFFF, format16(1, 1, 48000, 2, 16)), sound), err: "4294967295 bytes", fileOnly: true},
		{name: "fmt of 2 GB", file: riff("RIFF", sized("fmt ", 0x7FFFFFFE, format16(1, 1, 48000, 2, 16)), sound), err: "2147483646 bytes", fileOnly: true},
		{name: "LIST of 4 GB before fmt", file: riff("RIFF", sized("LIST", big, list), mono, sound), err: `"LIST" is said`, fileOnly: true},
		{name: "LIST of 4 GB behind fmt", file: riff("RIFF", mono, sized("LIST", big, list), sound), err: `"LIST" is said`, fileOnly: true},
		{name: "smpl of 4 GB", file: riff("RIFF", mono, sized("smpl", big, list), sound), err: `"smpl" is said`, fileOnly: true},
		{name: "cue of 4 GB", file: riff("RIFF", mono, sized("cue ", big, list), sound), err: `"cue " is said`, fileOnly: true},
		{name: "INFO part of 4 GB", file: riff("RIFF", mono, part("LIST", []byte("INFOISFT\xff\xff\xff\xffsound")), sound), want: ok},
		{name: "JUNK, bext, LIST before fmt", file: riff("RIFF", part("JUNK", make([]byte, 28)), part("bext", make([]byte, 602)), part("LIST", list), mono, sound), want: ok},
		{name: "LIST between fmt and data", file: riff("RIFF", mono, part("LIST", list), sound), want: ok},
		{name: "LIST behind data", file: riff("RIFF", mono, sound, part("LIST", list)), want: ok},
		{name: "odd chunk padded", file: riff("RIFF", part("JUNK", []byte("xyz")), mono, sound), want: ok},
		{name: "odd chunk not padded", file: riff("RIFF", sized("JUNK", 3, []byte("xyz")), mono, sound), want: ok},
		{name: "odd chunk padded with a letter", file: riff("RIFF", mono, sized("LIST", 3, []byte("xyzx")), sound), want: ok},
		{name: "nameless chunk", file: riff("RIFF", mono, part("\x00\x00\x00\x00", nil), sound), want: ok},
		{name: "a thousand chunks", file: riff("RIFF", mono, bytes.Repeat(part("JUNK", nil), 1000), sound), err: "no data chunk among"},
		{name: "no channel", file: riff("RIFF", part("fmt ", format16(1, 0, 48000, 0, 16)), sound), err: "0 channels"},
		{name: "65535 channels", file: riff("RIFF", part("fmt ", format16(1, 65535, 48000, 65534, 16)), sound), err: "65535 channels"},
		{name: "no rate", file: riff("RIFF", part("fmt ", format16(1, 1, 0, 2, 16)), sound), err: "0 Hz"},
		{name: "rate of 4 GHz", file: riff("RIFF", part("fmt ", format16(1, 1, 4e9, 2, 16)), sound), err: "4000000000 Hz"},
		{name: "no bits", file: riff("RIFF", part("fmt ", format16(1, 1, 48000, 2, 0)), sound), err: "0-bit PCM"},
		{name: "48 bits", file: riff("RIFF", part("fmt ", format16(1, 1, 48000, 6, 48)), sound), err: "48-bit PCM"},
		{name: "16-bit float", file: riff("RIFF", part("fmt ", format16(3, 1, 48000, 2, 16)), sound), err: "16-bit float"},
		{name: "A-law", file: riff("RIFF", part("fmt ", format16(6, 1, 8000, 1, 8)), sound), err: "A-law"},
		{name: "MP3 inside", file: riff("RIFF", part("fmt ", format16(0x55, 2, 44100, 1, 0)), sound), err: "MP3"},
		{name: "unknown tag", file: riff("RIFF", part("fmt ", format16(0x1234, 2, 44100, 4, 16)), sound), err: "0x1234"},
		{name: "frame size 0", file: riff("RIFF", part("fmt ", format16(1, 1, 48000, 0, 16)), sound), want: ok, warn: "frame size"},
		{name: "frame size wrong", file: riff("RIFF", part("fmt ", format16(1, 1, 48000, 4, 16)), sound), err: "4 bytes"},
		{name: "12 bits in 16", file: riff("RIFF", part("fmt ", format16(1, 1, 48000, 2, 12)), sound), want: ok},
		{name: "extensible of 18 bytes", file: riff("RIFF", part("fmt ", append(format16(0xFFFE, 1, 48000, 2, 16), 0, 0)), sound), err: "needs 40"},
		{name: "extensible, other sub-format", file: riff("RIFF", part("fmt ", extensible(1, 2, 16, 16, "0123456789abcdef")), sound), err: "sub-format"},
		{name: "extensible PCM", file: riff("RIFF", part("fmt ", extensible(1, 2, 16, 16, guidPCM)), sound), want: ok},
		{name: "extensible, 20 valid of 24 bits", file: riff("RIFF", part("fmt ", extensible(1, 3, 24, 20, guidPCM)), part("data", []byte{0, 1, 0, 0, 2, 0, 0, 3, 0})), want: ok},
		{name: "extensible float", file: riff("RIFF", part("fmt ", extensible(1, 4, 32, 32, guidFloat)), part("data", le32(math.Float32bits(-0.5)))), want: []float64{-16384}},
		{name: "float, not a number", file: riff("RIFF", part("fmt ", format16(3, 1, 48000, 4, 32)), part("data", le32(0x7FC00000))), err: "not a finite number"},
		{name: "float, infinite", file: riff("RIFF", part("fmt ", format16(3, 1, 48000, 8, 64)), part("data", le64(math.Float64bits(math.Inf(-1))))), err: "not a finite number"},
		{name: "float, beyond full scale", file: riff("RIFF", part("fmt ", format16(3, 1, 48000, 4, 32)), part("data", le32(math.Float32bits(2)))), want: []float64{65536}},
		{name: "no sound", file: riff("RIFF", mono, part("data", nil)), want: []float64{}},
		{name: "no sound, LIST behind", file: riff("RIFF", mono, part("data", nil), part("LIST", list)), want: []float64{}},
		{name: "data promises more", file: riff("RIFF", mono, sized("data", 1000, le16(1, 2, 3))), want: ok, warn: "ends early"},
		{name: "data promises 4 GB", file: riff("RIFF", mono, sized("data", big, le16(1, 2, 3))), want: ok, warn: "ends early"},
		{name: "cut within a sample", file: right[:len(right)-1], want: ok[:2], warn: "ends early"},
		{name: "data of 5 bytes", file: riff("RIFF", mono, sized("data", 5, append(le16(1, 2), 3, 0))), want: ok[:2], warn: "incomplete"},
		{name: "8 bits, odd, padded", file: riff("RIFF", part("fmt ", format16(1, 1, 48000, 1, 8)), part("data", []byte{0, 128, 192})), want: []float64{-32768, 0, 16384}},
		{name: "sizes 0xFFFFFFFF", file: join([]byte("RIFF\xff\xff\xff\xffWAVE"), mono, sized("data", 0xFFFFFFFF, le16(1, 2, 3))), want: ok, warn: "never filled in"},
		{name: "sizes 0", file: join([]byte("RIFF\x00\x00\x00\x00WAVE"), mono, sized("data", 0, le16(1, 2, 3))), want: ok, warn: "never filled in"},
		{name: "sizes of a header alone", file: join([]byte("RIFF\x24\x00\x00\x00WAVE"), mono, sized("data", 0, le16(1, 2, 3))), want: ok, warn: "never filled in"},
		{name: "sizes of a pipe", file: join([]byte("RIFF\x24\xf0\xff\x7fWAVE"), mono, sized("data", 0x7FFFF000, le16(1, 2, 3))), want: ok, warn: "never filled in"},
		{name: "RIFF size wrong", file: join([]byte("RIFF\x01\x02\x03\x04WAVE"), mono, sound), want: ok},
		{name: "RF64", file: riff("RF64", part("ds64", join(le64(72), le64(6), le64(3), le32(0))), mono, sized("data", 0xFFFFFFFF, le16(1, 2, 3, 4))), want: ok},
		{name: "BW64", file: riff("BW64", part("ds64", join(le64(72), le64(6), le64(3), le32(0))), mono, sized("data", 0xFFFFFFFF, le16(1, 2, 3, 4))), want: ok},
		{name: "RF64, ds64 promises 2^63", file: riff("RF64", part("ds64", join(le64(72), le64(1<<63), le64(3), le32(0))), mono, sized("data", 0xFFFFFFFF, le16(1, 2, 3))), want: ok, warn: "never filled in"},
		{name: "RF64, ds64 promises more", file: riff("RF64", part("ds64", join(le64(72), le64(1<<40), le64(3), le32(0))), mono, sized("data", 0xFFFFFFFF, le16(1, 2, 3))), want: ok, warn: "ends early"},
		{name: "RF64, ds64 of 8 bytes", file: riff("RF64", part("ds64", le64(72)), mono, sound), err: "ds64"},
		{name: "RF64 without ds64", file: riff("RF64", mono, sized("data", 0xFFFFFFFF, le16(1, 2, 3))), want: ok, warn: "never filled in"},
	}
}

func TestBrokenFiles(t *testing.T) {
	for _, tt := range faults() {
		for how, src := range map[string]io.Reader{"file": bytes.NewReader(tt.file), "pipe": stream{bytes.NewReader(tt.file)}} {
			t.Run(tt.name+"/"+how, func(t *testing.T) {
				got, warnings, err := readSome(t, src)
				var fe *wavfile.FormatError
				switch {
				case tt.fileOnly && how == "pipe":
					if !errors.As(err, &fe) {
						t.Errorf("got %v, %v; want a refusal", got, err)
					}
				case tt.err != "":
					if !errors.As(err, &fe) || !strings.Contains(err.Error(), tt.err) || fe.Mend == "" {
						t.Errorf("got %v, error %v; want one with %q", got, err, tt.err)
					}
				case err != nil:
					t.Error(err)
				case !slices.Equal(got, tt.want):
					t.Errorf("got %v, want %v", got, tt.want)
				case tt.warn == "" && len(warnings) > 0, tt.warn != "" && !strings.Contains(strings.Join(warnings, "; "), tt.warn):
					t.Errorf("warnings %q, want %q", warnings, tt.warn)
				}
			})
		}
	}
}

// readSome returns the samples in 32768ths.
func readSome(t *testing.T, src io.Reader) ([]float64, []string, error) {
	t.Helper()
	rd, err := wavfile.NewReader(src)
	if err != nil {
		if rd != nil {
			t.Error("a reader together with an error")
		}
		return nil, nil, err
	}
	buf, err := wavfile.ReadAll(rd, 1000)
	if err != nil {
		return nil, nil, err
	}
	if frames := rd.Frames(); frames != int64(len(buf.Data)/rd.Format().NumChannels) {
		t.Errorf("after the end the file has %d frames, read %d samples", frames, len(buf.Data))
	}
	for i := range buf.Data {
		buf.Data[i] *= 32768
	}
	return buf.Data, rd.Warnings(), nil
}

// No size in a file makes the reader allocate: two 64 KiB buffers and small change
// is all that any of these files gets, however many gigabytes it promises.
func TestBrokenFilesTakeLittleMemory(t *testing.T) {
	for _, tt := range faults() {
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		rd, err := wavfile.NewReader(bytes.NewReader(tt.file))
		if err == nil {
			_, err = wavfile.ReadAll(rd, 1000)
		}
		runtime.ReadMemStats(&after)
		if n := after.TotalAlloc - before.TotalAlloc; n > 256<<10 {
			t.Errorf("%s: %d bytes allocated (%v)", tt.name, n, err)
		}
	}
}

// An I/O error is neither the end of the file nor a fault of its format.
func TestSourceFails(t *testing.T) {
	file := write(t, audio.Format{NumChannels: 2, SampleRate: 48000}, wavfile.Settings{}, noise(2*50000, 1))
	broken := errors.New("disk on fire")
	for _, at := range []int{0, 5, 12, 30, 67, 68, 100, 70000, len(file) - 1} {
		src := io.MultiReader(bytes.NewReader(file[:at]), failing{broken})
		rd, err := wavfile.NewReader(src)
		if err == nil {
			_, err = wavfile.ReadAll(rd, 1<<20)
		}
		if !errors.Is(err, broken) {
			t.Errorf("after %d bytes: %v", at, err)
		}
	}
}

type failing struct{ err error }

func (f failing) Read([]byte) (int, error) { return 0, f.err }

// A failing disk is told at once and at Close, and nothing panics behind it.
func TestDestinationFails(t *testing.T) {
	x := noise(2*50000, 1)
	for _, room := range []int{0, 20, 68, 70, 70000, 300000} {
		w, err := wavfile.NewWriter(&smallDisk{room: room}, audio.Format{NumChannels: 2, SampleRate: 48000}, wavfile.Settings{})
		if err == nil {
			err = w.WriteFrames(x)
			if closed := w.Close(); closed == nil || (err != nil && closed.Error() != err.Error()) {
				t.Errorf("room for %d bytes: WriteFrames %v, Close %v", room, err, closed)
			} else {
				err = closed
			}
		}
		if !errors.Is(err, io.ErrShortWrite) {
			t.Errorf("room for %d bytes: %v", room, err)
		}
	}
}

type smallDisk struct {
	memory
	room int
}

func (d *smallDisk) Write(p []byte) (int, error) {
	if d.room -= len(p); d.room < 0 {
		return 0, io.ErrShortWrite
	}
	return d.memory.Write(p)
}

// What was written before Close can be read: the header says "size not known".
func TestWriterCutShort(t *testing.T) {
	var m memory
	w, err := wavfile.NewWriter(&m, audio.Format{NumChannels: 1, SampleRate: 48000}, wavfile.Settings{Encoding: wavfile.PCM16})
	if err != nil {
		t.Fatal(err)
	}
	x := noise(40000, 1)
	if err := w.WriteFrames(x); err != nil {
		t.Fatal(err)
	}
	rd, got := read(t, bytes.NewReader(m.b))
	if len(got) != 32768 || len(rd.Warnings()) != 1 {
		t.Errorf("%d samples, warnings %q; want one full buffer of 32768 and a warning", len(got), rd.Warnings())
	}
}

// A file of 4 GB is refused before it wraps, and what is there stays right.
func TestFourGigabytes(t *testing.T) {
	format := audio.Format{NumChannels: 64, SampleRate: 48000}
	w, err := wavfile.NewWriter(discard{}, format, wavfile.Settings{Encoding: wavfile.Float64})
	if err != nil {
		t.Fatal(err)
	}
	block := make([]float64, 64*(1<<13)) // 4 MiB in the file
	const most = (0xFFFFFFFF - 80) / 512 // frames of 512 bytes that fit, with the header
	for err == nil && w.Frames() < 2*most {
		err = w.WriteFrames(block)
	}
	if err == nil || !strings.Contains(err.Error(), "4 GB") {
		t.Fatalf("after %d frames: %v", w.Frames(), err)
	}
	if w.Frames() > most || w.Frames() < most-(1<<13) {
		t.Errorf("%d frames were taken, %d fit", w.Frames(), most)
	}
	if err := w.Close(); err != nil {
		t.Error(err)
	}
}
