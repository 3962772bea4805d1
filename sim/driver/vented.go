package driver

import "math"

// A Vent is what a vented box adds to a DataSheet.
type Vent struct {
	Alpha  float64 // compliance ratio Vas/Vb; 0: no vented box
	Tuning float64 // Hz, resonance of the air in the vent with the air in the box
	QL     float64 // Q of the box at Tuning by its leaks; +Inf: it has none
}

// InVentedBox returns the same driver on a vented box of net volume vb that is tuned to the frequency tuning in
// Hz; vas is the driver's compliance as a volume, in the same unit as vb. ql is the box's Q by its leaks, in
// which the smaller losses of the vent and the lining are counted too, as Small recommends; +Inf: none.
//
// A. N. Thiele, "Loudspeakers in Vented Boxes", Proc. IRE Australia 22(8), 487–508, 1961, reprinted in J. Audio
// Eng. Soc. 19(5), 382–392, 1971; R. H. Small, "Vented-Box Loudspeaker Systems", Part I, J. Audio Eng. Soc.
// 21(5), 363–372, 1973.
func (d DataSheet) InVentedBox(vas, vb, tuning, ql float64) DataSheet {
	d.Vent = Vent{Alpha: vas / vb, Tuning: tuning, QL: ql}
	return d
}

// BoxBranch returns the box as the voice coil sees it: lceb in H, the air in the box; cmep in F, the air in the
// vent; rel in Ω, the leaks; in series with one another, and together in parallel with the motional branch. They
// are in series because flow through the air spring, the vent and the leaks is driven by one pressure, which
// shows as a current. All are 0 without a vented box or without a motional branch.
func (d DataSheet) BoxBranch() (lceb, cmep, rel float64) {
	_, lces, _ := d.Motional()
	if d.Vent.Alpha == 0 || lces == 0 {
		return 0, 0, 0
	}
	w := 2 * math.Pi * d.Vent.Tuning
	lceb = lces / d.Vent.Alpha
	return lceb, 1 / (w * w * lceb), w * lceb / d.Vent.QL
}

// box returns air/all, the part of the diaphragm's volume velocity that vent and leaks do not take back: that
// which compresses the air in the box, since all that goes in must come out. It is s²T²/(s²T² + sT/QL + 1), T =
// 1/ω of the tuning (Small 1973).
func (v Vent) box(s complex128) (all, air complex128) {
	x := s / complex(2*math.Pi*v.Tuning, 0)
	air = x * x
	return air + x*complex(1/v.QL, 0) + 1, air
}
