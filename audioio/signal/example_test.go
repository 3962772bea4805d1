package signal_test

import (
	"fmt"

	"sixdown/audioio/signal"
)

// Plan tones at two frequencies and play them. Each is lowered a little so that a whole number of
// cycles fits the measuring window.
func ExampleNewSchedule() {
	plan, err := signal.NewSchedule([]float64{100, 1000}, 48000, signal.ToneSettings{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, tone := range plan.Tones {
		fmt.Printf("%.3f Hz: %d cycles in %d samples\n", tone.FrequencyHz, tone.Cycles, tone.MeasureSamples)
	}
	src, err := signal.NewTones(plan)
	if err != nil {
		fmt.Println(err)
		return
	}
	block := make([]float64, 1024)
	total := 0
	for {
		n, err := src.ReadSamples(block)
		if err != nil {
			break // io.EOF
		}
		total += n
	}
	fmt.Println(total == plan.LengthSamples)
	// Output:
	// 99.992 Hz: 25 cycles in 12001 samples
	// 999.917 Hz: 250 cycles in 12001 samples
	// true
}

func ExampleThirdOctaves() {
	for _, b := range signal.ThirdOctaves(1000, 2000) {
		fmt.Printf("%g Hz is %.2f Hz\n", b.Nominal, b.Hz)
	}
	// Output:
	// 1000 Hz is 1000.00 Hz
	// 1250 Hz is 1258.93 Hz
	// 1600 Hz is 1584.89 Hz
	// 2000 Hz is 1995.26 Hz
}
