package signal_test

import (
	"math"
	"testing"

	"sixdown/audioio/signal"
)

// Nominal frequencies: ISO 266:1997, the R10 series of ISO 3. Exact ones: IEC
// 61260-1, base ten, 1000·10^(k/10), computed apart to 4 decimals, so tol is half of the last.
func TestThirdOctaves(t *testing.T) {
	want := []signal.Band{
		{Nominal: 20, Hz: 19.9526}, {Nominal: 25, Hz: 25.1189}, {Nominal: 31.5, Hz: 31.6228}, {Nominal: 40, Hz: 39.8107},
		{Nominal: 50, Hz: 50.1187}, {Nominal: 63, Hz: 63.0957}, {Nominal: 80, Hz: 79.4328}, {Nominal: 100, Hz: 100},
		{Nominal: 125, Hz: 125.8925}, {Nominal: 160, Hz: 158.4893}, {Nominal: 200, Hz: 199.5262}, {Nominal: 250, Hz: 251.1886},
		{Nominal: 315, Hz: 316.2278}, {Nominal: 400, Hz: 398.1072}, {Nominal: 500, Hz: 501.1872}, {Nominal: 630, Hz: 630.9573},
		{Nominal: 800, Hz: 794.3282}, {Nominal: 1000, Hz: 1000}, {Nominal: 1250, Hz: 1258.9254}, {Nominal: 1600, Hz: 1584.8932},
		{Nominal: 2000, Hz: 1995.2623}, {Nominal: 2500, Hz: 2511.8864}, {Nominal: 3150, Hz: 3162.2777}, {Nominal: 4000, Hz: 3981.0717},
		{Nominal: 5000, Hz: 5011.8723}, {Nominal: 6300, Hz: 6309.5734}, {Nominal: 8000, Hz: 7943.2823}, {Nominal: 10000, Hz: 10000},
		{Nominal: 12500, Hz: 12589.2541}, {Nominal: 16000, Hz: 15848.9319}, {Nominal: 20000, Hz: 19952.6231},
	}
	got := signal.ThirdOctaves(20, 20000)
	if len(got) != len(want) {
		t.Fatalf("%d bands, want %d", len(got), len(want))
	}
	for i, w := range want {
		if got[i].Nominal != w.Nominal || math.Abs(got[i].Hz-w.Hz) > 0.5e-4 {
			t.Errorf("band %d is %+v, want %+v", i, got[i], w)
		}
	}
	if b := signal.ThirdOctaves(900, 1100); len(b) != 1 || b[0].Nominal != 1000 {
		t.Errorf("900 to 1100 Hz: %+v", b)
	}
	if b := signal.ThirdOctaves(math.NaN(), 100); len(b) != 0 {
		t.Errorf("from NaN: %+v", b)
	}
}
