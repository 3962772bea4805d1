package wavfile

import (
	"encoding/binary"
	"math"
	"math/rand/v2"
)

// roundBias is 1.5·2^52. Adding it to a float64 below 2^31 in magnitude leaves
// the value, rounded to the nearest whole number (ties to even), in the low 32 bits
// of the sum, in two's complement.
const roundBias = 3 << 51

// code returns x·scale, rounded, as the bits of an int32; top is (scale − 1)/scale. A
// value outside ±1 is clipped and counted. +1 itself has no code in two's
// complement: it becomes the highest code, one step less, and is not counted.
func code(x, scale, top float64, clipped *int64) uint32 {
	if x >= -1 && x <= top {
		return uint32(math.Float64bits(x*scale + roundBias))
	}
	if math.Abs(x) > 1 {
		*clipped++
	}
	if x < 0 {
		return uint32(int32(-scale))
	}
	return uint32(int32(scale - 1))
}

// encode stores src in dst, a sample at every stride bytes, beginning at dst[0],
// and returns how many samples were clipped. Samples must be finite.
// Integer codes are x·2^(b−1), rounded: the inverse of decode. A dither source
// other than nil is used at 16 bits and below.
func encode(e Encoding, dst []byte, stride int, src []float64, dither rand.Source) (clipped int64) {
	const (
		scale8, top8   = 1 << 7, 1 - 0x1p-7
		scale16, top16 = 1 << 15, 1 - 0x1p-15
		scale24, top24 = 1 << 23, 1 - 0x1p-23
		scale32, top32 = 1 << 31, 1 - 0x1p-31
	)
	switch e {
	case PCM8:
		for i, x := range src {
			v := code(x, scale8, top8, &clipped)
			if dither != nil {
				v = dithered(x, scale8, dither)
			}
			dst[i*stride] = byte(v + 128)
		}
	case PCM16:
		for i, x := range src {
			v := code(x, scale16, top16, &clipped)
			if dither != nil {
				v = dithered(x, scale16, dither)
			}
			binary.LittleEndian.PutUint16(dst[i*stride:], uint16(v))
		}
	case PCM24:
		for i, x := range src {
			v := code(x, scale24, top24, &clipped)
			b := dst[i*stride:]
			_ = b[2]
			b[0], b[1], b[2] = byte(v), byte(v>>8), byte(v>>16)
		}
	case PCM32:
		for i, x := range src {
			binary.LittleEndian.PutUint32(dst[i*stride:], code(x, scale32, top32, &clipped))
		}
	case Float32:
		for i, x := range src {
			binary.LittleEndian.PutUint32(dst[i*stride:], math.Float32bits(float32(x)))
		}
	case Float64:
		for i, x := range src {
			binary.LittleEndian.PutUint64(dst[i*stride:], math.Float64bits(x))
		}
	}
	return clipped
}

// dithered is code with one step of triangular dither (TPDF) added before rounding,
// which makes the mean and the power of the rounding error independent of the
// signal: S. P. Lipshitz, R. A. Wannamaker, J. Vanderkooy, "Quantization and
// Dither: A Theoretical Survey", J. Audio Eng. Soc. 40(5), 355–375, 1992.
// Near full scale the dither saturates.
func dithered(x, scale float64, dither rand.Source) uint32 {
	u := dither.Uint64() // its halves are two uniform variates
	tpdf := float64(int64(u>>32)-int64(u&math.MaxUint32)) * (1.0 / (1 << 32))
	v := math.RoundToEven(x*scale + tpdf)
	return uint32(int32(max(min(v, scale-1), -scale)))
}

// storable returns how many samples of src come before the first that e cannot
// hold: one that is not a number or infinite, or becomes so in 32 bits.
func storable(e Encoding, src []float64) int {
	limit := math.MaxFloat64
	if e == Float32 {
		limit = math.MaxFloat32
	}
	for i, x := range src {
		if !(x >= -limit && x <= limit) {
			return i
		}
	}
	return len(src)
}
