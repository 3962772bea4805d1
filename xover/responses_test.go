package xover

import (
	"reflect"
	"testing"
)

// TestResponses: the angles come out in rising order, -180 as 180, and the file on the axis is the response.
func TestResponses(t *testing.T) {
	for _, c := range []struct {
		name, responses      string
		response             string
		horizontal, vertical []AngledFile
	}{
		{"both planes", `h = { "0" = "a", "10" = "b", "-10" = "c" }, v = { "0" = "a", "-2.5" = "d" }`, "a",
			[]AngledFile{{-10, "c"}, {0, "a"}, {10, "b"}}, []AngledFile{{-2.5, "d"}, {0, "a"}}},
		{"bare keys, and the axis in one plane", `h = { -180 = "b", 0 = "a" }, v = { 5 = "d" }`, "a",
			[]AngledFile{{0, "a"}, {180, "b"}}, []AngledFile{{5, "d"}}},
		{"vertical alone", `v = { "0" = "a" }`, "a", nil, []AngledFile{{0, "a"}}},
	} {
		d, warnings, err := Parse("", []byte("[driver.d]\nre = \"6 ohm\"\nphase = \"minimum\"\nresponses = { "+c.responses+" }\n[[way]]\nname = \"w\"\ndriver = \"d\"\nnetwork = []\n"))
		if err != nil || len(warnings) > 0 {
			t.Fatalf("%s: %v %v", c.name, err, warnings)
		}
		if got := d.Drivers[0]; got.ResponseFile != c.response || !reflect.DeepEqual(got.Horizontal, c.horizontal) || !reflect.DeepEqual(got.Vertical, c.vertical) {
			t.Errorf("%s: got %q %v %v", c.name, got.ResponseFile, got.Horizontal, got.Vertical)
		}
	}
}
