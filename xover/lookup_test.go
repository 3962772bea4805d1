package xover

import "testing"

func TestSetPart(t *testing.T) {
	d := parseGood(t, "testdata/good/threeway.toml")
	if err := d.SetPart("R2", 4.7); err != nil {
		t.Fatal(err)
	}
	if d.Part("R2").Value != 4.7 || d.Part("R3").Value != 4.7 {
		t.Errorf("R2 is %v and R3, which follows it, %v", d.Part("R2").Value, d.Part("R3").Value)
	}
	if err := d.SetControl("presence", 1); err != nil || d.Turn("P1") != 1 {
		t.Errorf("P1 is turned to %v: %v", d.Turn("P1"), err)
	}
	if got := d.Turn("P9"); got != DefaultTurn {
		t.Errorf("a potentiometer without a control is turned to %v", got)
	}
}

func TestLookup(t *testing.T) {
	d := parseGood(t, "testdata/good/threeway.toml")
	if p := d.Part("C4"); p == nil || p != &d.Parts[9] {
		t.Errorf("C4 is %v, want the tenth part itself", p)
	}
	if v := d.Driver("treble"); v == nil || v != &d.Drivers[2] {
		t.Errorf("treble is %v, want the third driver itself", v)
	}
	if w := d.Way("middle"); w == nil || w != &d.Ways[1] {
		t.Errorf("middle is %v, want the second way itself", w)
	}
	if d.Part("c4") != nil || d.Driver("") != nil || d.Way("treble ") != nil || d.Control("P1") != nil {
		t.Error("a name that does not exist was found")
	}
}

func TestEmptyDesign(t *testing.T) {
	var d Design
	if err := d.SetPart("C1", 1); err == nil || err.Error() != `there is no part "C1"; [parts] defines none` {
		t.Error(err)
	}
	if err := d.SetControl("bass", 1); err == nil || err.Error() != `there is no control "bass"; the design has no controls` {
		t.Error(err)
	}
}
