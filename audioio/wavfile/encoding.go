package wavfile

import "fmt"

// Encoding is how one sample is stored. The zero value stands for [PCM24].
type Encoding int

// The encodings that can be read and written.
const (
	PCM8    Encoding = iota + 1 // unsigned integer, 8 bits
	PCM16                       // signed integer, 16 bits
	PCM24                       // signed integer, 24 bits
	PCM32                       // signed integer, 32 bits
	Float32                     // IEEE 754 binary32
	Float64                     // IEEE 754 binary64
)

// PCM returns the integer encoding of that many bits: 8, 16, 24 or 32.
func PCM(bits int) (Encoding, error) {
	switch bits {
	case 8:
		return PCM8, nil
	case 16:
		return PCM16, nil
	case 24:
		return PCM24, nil
	case 32:
		return PCM32, nil
	}
	return 0, fmt.Errorf("wav: encoding: there is no PCM of %d bits; ask for 8, 16, 24 or 32", bits)
}

// Bits returns the size of a stored sample in bits.
func (e Encoding) Bits() int {
	switch e {
	case PCM8:
		return 8
	case PCM16:
		return 16
	case PCM24:
		return 24
	case PCM32, Float32:
		return 32
	case Float64:
		return 64
	}
	return 0
}

// IsFloat reports whether samples are stored in floating point, which neither
// clips nor needs dither.
func (e Encoding) IsFloat() bool { return e == Float32 || e == Float64 }

// String returns a short name, "24-bit PCM".
func (e Encoding) String() string {
	switch {
	case e.Bits() == 0:
		return fmt.Sprintf("Encoding(%d)", int(e))
	case e.IsFloat():
		return fmt.Sprintf("%d-bit float", e.Bits())
	}
	return fmt.Sprintf("%d-bit PCM", e.Bits())
}

func (e Encoding) bytes() int { return e.Bits() / 8 }
