package wavfile

import "fmt"

// FormatError tells why a file cannot be read as WAV.
type FormatError struct {
	Offset int64  // where in the file, bytes from its beginning
	What   string // what is wrong there
	Mend   string // what the owner of the file can do about it
}

// Error returns where, what and how to mend, in one sentence.
func (e *FormatError) Error() string {
	return fmt.Sprintf("wav: byte %d: %s; %s", e.Offset, e.What, e.Mend)
}

// Remedies that fit several faults.
const (
	mendExport  = "export the file again as WAV, PCM or 32-bit float"
	mendRecopy  = "copy the file again from where it came"
	mendRecord  = "record or export the file again"
	mendNoSound = "record or export the file again, it holds no sound"
)

func faultAt(offset int64, mend, format string, args ...any) *FormatError {
	return &FormatError{Offset: offset, What: fmt.Sprintf(format, args...), Mend: mend}
}
