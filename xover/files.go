package xover

import "slices"

// Files returns the names of the files that the design names, each once, in the order of the design.
func (d *Design) Files() []string {
	var names []string
	add := func(name string) {
		if name != "" && !slices.Contains(names, name) {
			names = append(names, name)
		}
	}
	for i := range d.Drivers {
		x := &d.Drivers[i]
		add(x.ImpedanceFile)
		add(x.ResponseFile)
		for _, f := range slices.Concat(x.Horizontal, x.Vertical) {
			add(f.File)
		}
	}
	add(d.Tune.CurveFile)
	return names
}
