package driver

import (
	"bytes"
	"encoding/json"
	"os"
	"os/exec"
	"testing"
)

// A scipyFit is what testdata/leastsquares.py answers.
type scipyFit struct {
	Value map[string]float64 `json:"value"`
	Sigma map[string]float64 `json:"sigma"`
	RMS   float64            `json:"rms"`
}

// askScipy fits the rows of an impedance table by SciPy. Without an interpreter that has it the test is skipped, but
// in a continuous-integration run (CI set) it fails.
func askScipy(t *testing.T, rows []Row, vented bool) scipyFit {
	t.Helper()
	python := ""
	for _, name := range []string{"python3", "/usr/bin/python3"} {
		if exec.Command(name, "-c", "import scipy").Run() == nil {
			python = name
			break
		}
	}
	if python == "" {
		if os.Getenv("CI") != "" {
			t.Fatal("there is no python3 that can import scipy; install python3-scipy")
		}
		t.Skip("there is no python3 that can import scipy")
	}
	request := map[string]any{"vented": vented}
	var hz, ohm, deg []float64
	for _, r := range rows {
		hz, ohm, deg = append(hz, r.Frequency), append(ohm, r.Value), append(deg, r.PhaseDeg)
	}
	request["hz"], request["ohm"], request["deg"] = hz, ohm, deg
	text, err := json.Marshal(request)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(python, "../../testdata/leastsquares.py")
	cmd.Stdin = bytes.NewReader(text)
	var out, complaint bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &complaint
	if err := cmd.Run(); err != nil {
		t.Fatalf("leastsquares.py: %v\n%s", err, complaint.String())
	}
	var answer scipyFit
	if err := json.Unmarshal(out.Bytes(), &answer); err != nil {
		t.Fatalf("leastsquares.py: %v", err)
	}
	return answer
}

// SciPy, given the circuit, finds the same minimum from another start, with other unknowns and another method: both
// are at it to a thousandth of a standard deviation. Its standard deviations do not allow for neighbours that err
// alike; of 1000 independent numbers the correlation is some 1/√1000, and three times that is 10 % of σ.
func TestFitAgreesWithScipy(t *testing.T) {
	for name, z := range map[string]func(f float64) complex128{"A": of(wooferA), "B": of(wooferB), "vented": ventedWoofer} {
		table, err := ReadTable("w.zma", bytes.NewReader([]byte(noisyFile(grid(10, 20e3, 500), z, 0.005, 21))))
		if err != nil {
			t.Fatal(err)
		}
		load, err := NewImpedanceTable(table)
		if err != nil {
			t.Fatal(err)
		}
		f := load.Fit()
		want := askScipy(t, table.Rows, name == "vented")
		got := map[string]Estimate{"re": f.Re, "fs": f.Fs, "qms": f.Qms, "qes": f.Qes}
		if f.Box != nil {
			got["fb"], got["alpha"], got["ql"] = f.Box.Fb, f.Box.Alpha, f.Box.QL
		}
		if len(got)+1 != len(want.Value) { // Le has no estimate of its own
			t.Fatalf("%s: got %v, want %v", name, got, want.Value)
		}
		near(t, name+" Le", f.Le, want.Value["le"], 1e-5)
		for key, e := range got {
			near(t, name+" "+key, e.Value, want.Value[key], 1e-3*want.Sigma[key]/want.Value[key])
			near(t, name+" sigma of "+key, e.Sigma, want.Sigma[key], 0.1)
		}
		near(t, name+" rms", f.RMSPercent, 100*want.RMS, 0.01) // |e^x - 1| for |x|, and the half weight of the first and last row
	}
}
