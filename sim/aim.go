package sim

import (
	"fmt"
	"io"
	"math"

	"gonum.org/v1/gonum/interp"

	"sixdown/sim/driver"
	"sixdown/xover"
)

// mostCurveDB is how far a curve may be from the level: beyond what any loudspeaker or tone control does.
const mostCurveDB = 60

// Aim returns what the sum should do over freqs, in Hz, by a design's [tune]: dB about its level. It is the tilt, which is 0 at
// 1 kHz, and the curve, straight between its rows in log frequency and flat beyond them. open opens the curve's file; it
// may be nil if there is none.
func Aim(t *xover.Tune, freqs []float64, open func(name string) (io.ReadCloser, error)) ([]float64, error) {
	aim := make([]float64, len(freqs))
	for i, f := range freqs {
		aim[i] = t.Tilt * math.Log2(f/1000)
	}
	if t.CurveFile == "" {
		return aim, nil
	}
	if open == nil {
		return nil, fmt.Errorf("curve %s: there is nothing to open files with; leave it out", t.CurveFile)
	}
	r, err := open(t.CurveFile)
	if err != nil {
		return nil, fmt.Errorf("curve: %w", err)
	}
	defer r.Close() // it was only read
	table, err := driver.ReadTable(t.CurveFile, r)
	if err != nil {
		return nil, err
	}
	x, y := make([]float64, len(table.Rows)), make([]float64, len(table.Rows))
	for i, row := range table.Rows {
		if !(math.Abs(row.Value) <= mostCurveDB) {
			return nil, fmt.Errorf("%s:%d: the curve is at %g dB; give dB about the level, within ±%d", t.CurveFile, row.Line, row.Value, mostCurveDB)
		}
		x[i], y[i] = math.Log(row.Frequency), row.Value
	}
	var line interp.PiecewiseLinear
	if err := line.Fit(x, y); err != nil {
		return nil, fmt.Errorf("curve %s: %w; give rows of Hz and dB", t.CurveFile, err)
	}
	for i, f := range freqs {
		aim[i] += line.Predict(math.Log(f))
	}
	return aim, nil
}
