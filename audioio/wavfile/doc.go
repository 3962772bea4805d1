// Package wavfile reads and writes WAV files as streams, in constant memory.
//
// Samples are float64 with full scale at ±1, interleaved in frames: one sample
// of each channel, channel 1 first. [Reader] and [Writer] follow io.Reader and
// io.Writer; both also take one slice a channel.
//
// A file read here may come from anywhere: a sound card's software, a hand-held
// recorder, a half-finished download. Every size in it is therefore checked
// against what the file holds before it is believed, nothing is allocated
// from a size the file states, and what cannot be read is refused with
// a [FormatError] that says where, why and what to do. Faults that leave no
// doubt about the samples (an early end, a size never filled in) are read over
// and told by [Reader.Warnings].
//
// The layout follows IBM and Microsoft, "Multimedia Programming Interface and
// Data Specifications 1.0", 1991 (RIFF, the fmt and data chunks); Microsoft,
// "Multiple Channel Audio Data and WAVE Files", 2001 (WAVE_FORMAT_EXTENSIBLE);
// and EBU Tech 3306, "RF64: An extended file format for audio", 2009 (RF64 and ds64).
package wavfile
