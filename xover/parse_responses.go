package xover

import (
	"cmp"
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// driverResponses reads `responses = { h = { "0" = "FILE", … }, v = { … } }`.
func (p *parser) driverResponses(d *Driver, r *tableReader) {
	const example = `responses = { h = { "0" = "w_0.frd", "30" = "w_30.frd" } }`
	r.inTable("responses", example, func(all *tableReader) {
		all.label = r.label + " responses"
		for _, plane := range []struct {
			key  string
			name string
			dst  *[]AngledFile
		}{{"h", "horizontal", &d.Horizontal}, {"v", "vertical", &d.Vertical}} {
			all.inTable(plane.key, plane.key+` = { "0" = "w_0.frd", "30" = "w_30.frd" }`, func(one *tableReader) {
				one.label = all.label + " " + plane.key
				one.open = true
				*plane.dst = p.angledFiles(one)
			})
		}
		p.onAxis(d, all)
	})
	if e := r.table.index["responses"]; e != nil && r.table.index["response"] != nil {
		p.fail(p.pos(e.at), r.label+" has both response and responses", `take response out; its file belongs at "0"`)
	}
}

// angledFiles reads the keys of one plane, which are angles, in rising order.
func (p *parser) angledFiles(r *tableReader) []AngledFile {
	var files []AngledFile
	written := map[float64]string{}
	for _, e := range r.table.keys {
		if len(files) >= MaxAngles {
			p.fail(p.pos(e.at), fmt.Sprintf("%s has more than %d angles", r.label, MaxAngles), "leave some out")
			break
		}
		deg, ok := angleOf(e.name)
		switch {
		case e.value.kind == tableNode && ok: // a bare 2.5 is key 5 of a table 2
			p.fail(p.pos(e.at), fmt.Sprintf("%s has a table at %s", r.label, shortened(e.name)), `write an angle with a point in quotes, such as "2.5" = "w_2.5.frd"`)
			continue
		case !ok:
			p.fail(p.pos(e.at), fmt.Sprintf("%s has an angle %q", r.label, shortened(e.name)), `write degrees from -180 to 180 without a unit, such as "30" = "w_30.frd"; positive is right or up`)
			continue
		case written[deg] != "":
			p.fail(p.pos(e.at), fmt.Sprintf("%s has %q and %q, which are one direction", r.label, written[deg], shortened(e.name)), "take one of them out")
			continue
		}
		written[deg] = shortened(e.name)
		if f := (AngledFile{AngleDeg: deg}); r.text(e.name, &f.File) {
			files = append(files, f)
		}
	}
	slices.SortFunc(files, func(a, b AngledFile) int { return cmp.Compare(a.AngleDeg, b.AngleDeg) })
	return files
}

// angleOf reads an angle in degrees, -180 as 180, which is the same direction. There is no other notation than
// digits with a sign and a point.
func angleOf(text string) (deg float64, ok bool) {
	if strings.Trim(text, "+-.0123456789") != "" {
		return 0, false
	}
	deg, err := strconv.ParseFloat(text, 64)
	if err != nil || !(deg >= -180 && deg <= 180) {
		return 0, false
	}
	switch deg {
	case -180:
		deg = 180
	case 0:
		deg = 0 // not -0, which would be written so
	}
	return deg, true
}

// onAxis finds the file on the axis, which is the driver's response too.
func (p *parser) onAxis(d *Driver, r *tableReader) {
	var files []string
	tables := 0
	for _, key := range []string{"h", "v"} {
		if e := r.table.index[key]; e != nil && e.value.kind == tableNode {
			tables++
		}
	}
	for _, plane := range [][]AngledFile{d.Horizontal, d.Vertical} {
		for _, f := range plane {
			if f.AngleDeg == 0 {
				files = append(files, f.File)
			}
		}
	}
	switch {
	case len(r.table.keys) == 0:
		p.fail(p.pos(r.table.at), r.label+" is empty", `write it like { h = { "0" = "w_0.frd", "30" = "w_30.frd" } }, or leave it out`)
	case len(files) == 0 && tables > 0:
		p.fail(p.pos(r.table.at), r.label+" has no file on the axis", `give the one at "0"; the others are taken relative to it`)
	case len(files) == 2 && files[0] != files[1]:
		p.fail(p.pos(r.table.at), r.label+" has two files on the axis, that of h and that of v", `give the same one at "0" in both, or leave it out in v`)
	case len(files) > 0:
		d.ResponseFile = files[0]
	}
}
