package wavfile

import (
	"encoding/binary"
	"math"
)

// decode stores in dst the samples found in src at every stride bytes, scaled
// to full scale ±1: an integer sample of b bits is divided by 2^(b−1), so that
// the most negative code is −1 exactly and no code needs rounding.
// src begins at the first sample wanted.
func decode(e Encoding, dst []float64, src []byte, stride int) {
	if len(dst) == 0 {
		return
	}
	switch e {
	case PCM8:
		for i := range dst {
			dst[i] = float64(int(src[i*stride])-128) * (1.0 / (1 << 7))
		}
	case PCM16:
		for i := range dst {
			b := src[i*stride:]
			dst[i] = float64(int16(binary.LittleEndian.Uint16(b))) * (1.0 / (1 << 15))
		}
	case PCM24:
		for i := range dst {
			b := src[i*stride:]
			_ = b[2]
			// The three bytes are the upper ones of an int32: the sign then comes by itself.
			v := int32(b[0])<<8 | int32(b[1])<<16 | int32(b[2])<<24
			dst[i] = float64(v) * (1.0 / (1 << 31))
		}
	case PCM32:
		for i := range dst {
			b := src[i*stride:]
			dst[i] = float64(int32(binary.LittleEndian.Uint32(b))) * (1.0 / (1 << 31))
		}
	case Float32:
		for i := range dst {
			b := src[i*stride:]
			dst[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(b)))
		}
	case Float64:
		for i := range dst {
			b := src[i*stride:]
			dst[i] = math.Float64frombits(binary.LittleEndian.Uint64(b))
		}
	}
}

// finite returns how many samples of src come before the first that is not
// a number or infinite. Integer samples always are finite.
func finite(e Encoding, src []byte) int {
	const (
		exponent32 = 0xFF << 23
		exponent64 = 0x7FF << 52
	)
	switch e {
	case Float32:
		for i := 0; i+4 <= len(src); i += 4 {
			if binary.LittleEndian.Uint32(src[i:])&exponent32 == exponent32 {
				return i / 4
			}
		}
	case Float64:
		for i := 0; i+8 <= len(src); i += 8 {
			if binary.LittleEndian.Uint64(src[i:])&exponent64 == exponent64 {
				return i / 8
			}
		}
	}
	return len(src) / e.bytes()
}
