package wavfile

import (
	"encoding/binary"
	"math"
	"math/rand/v2"
)

// roundBias is 1.5·2^52. Adding it to a float64 below 2^51 in magnitude leaves
// the value, rounded to the nearest whole number (ties to even), as the
// difference between the bits of the sum and the bits of roundBias.
const (
	roundBias     = 3 << 51
	roundBiasBits = 0x4338 << 48
)

// toInt rounds x·scale to an integer. A value outside ±1 is clipped and counted.
// +1 itself has no code in two's complement: it becomes the highest code, one
// step less, and is not counted.
func toInt(x, scale float64, clipped *int64) int32 {
	if !(x >= -1 && x <= 1) {
		*clipped++
		x = math.Copysign(1, x)
	}
	v := int64(math.Float64bits(x*scale+roundBias)) - roundBiasBits
	return int32(min(v, int64(scale)-1))
}

// encode stores src in dst, a sample at every stride bytes, beginning at dst[0],
// and returns how many samples were clipped. Samples must be finite.
// Integer codes are x·2^(b−1), rounded: the inverse of decode. A dither source
// other than nil is used at 16 bits and below.
func encode(e Encoding, dst []byte, stride int, src []float64, dither rand.Source) (clipped int64) {
	switch e {
	case PCM8:
		for i, x := range src {
			dst[i*stride] = byte(ditheredInt(x, 1<<7, dither, &clipped) + 128)
		}
	case PCM16:
		if dither == nil {
			for i, x := range src {
				binary.LittleEndian.PutUint16(dst[i*stride:], uint16(toInt(x, 1<<15, &clipped)))
			}
			return clipped
		}
		for i, x := range src {
			binary.LittleEndian.PutUint16(dst[i*stride:], uint16(ditheredInt(x, 1<<15, dither, &clipped)))
		}
	case PCM24:
		for i, x := range src {
			v := toInt(x, 1<<23, &clipped)
			b := dst[i*stride:]
			_ = b[2]
			b[0], b[1], b[2] = byte(v), byte(v>>8), byte(v>>16)
		}
	case PCM32:
		for i, x := range src {
			binary.LittleEndian.PutUint32(dst[i*stride:], uint32(toInt(x, 1<<31, &clipped)))
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

// ditheredInt is toInt with one step of triangular dither (TPDF) added before
// rounding, which makes the mean and the power of the rounding error independent
// of the signal: S. P. Lipshitz, R. A. Wannamaker, J. Vanderkooy, "Quantization
// and Dither: A Theoretical Survey", J. Audio Eng. Soc. 40(5), 355–375, 1992.
// Only the signal counts as clipped, never the dither on top of it.
func ditheredInt(x, scale float64, dither rand.Source, clipped *int64) int32 {
	if dither == nil {
		return toInt(x, scale, clipped)
	}
	if !(x >= -1 && x <= 1) {
		*clipped++
		x = math.Copysign(1, x)
	}
	u := dither.Uint64() // its halves are two uniform variates
	tpdf := (float64(u>>32) - float64(u&math.MaxUint32)) * (1.0 / (1 << 32))
	v := math.RoundToEven(x*scale + tpdf)
	return int32(max(min(v, scale-1), -scale))
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
