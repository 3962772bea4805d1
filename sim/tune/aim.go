package tune

import (
	"fmt"
	"io"
	"math"

	"gonum.org/v1/gonum/interp"

	"sixdown/sim/driver"
	"sixdown/xover"
)

// aimOf returns what the sum should do over freqs, in dB about its level: the tilt, which is 0 at 1 kHz, and the curve,
// straight between its rows in log frequency and flat beyond them.
func aimOf(t *xover.Tune, freqs []float64, open func(name string) (io.ReadCloser, error)) ([]float64, error) {
	aim := make([]float64, len(freqs))
	for i, f := range freqs {
		aim[i] = t.Tilt * math.Log2(f/1000)
	}
	if t.CurveFile == "" {
		return aim, nil
	}
	if open == nil {
		return nil, fmt.Errorf("tune: curve %s: there is nothing to open files with; leave it out", t.CurveFile)
	}
	r, err := open(t.CurveFile)
	if err != nil {
		return nil, fmt.Errorf("tune: curve: %w", err)
	}
	defer r.Close() // it was only read
	table, err := driver.ReadTable(t.CurveFile, r)
	if err != nil {
		return nil, err
	}
	var x, y []float64
	for _, row := range table.Rows {
		x, y = append(x, math.Log(row.Frequency)), append(y, row.Value)
	}
	var line interp.PiecewiseLinear
	if err := line.Fit(x, y); err != nil {
		return nil, fmt.Errorf("tune: curve %s: %w; give rows of Hz and dB", t.CurveFile, err)
	}
	for i, f := range freqs {
		aim[i] += line.Predict(math.Log(f))
	}
	return aim, nil
}
