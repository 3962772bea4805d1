package xover

import (
	"fmt"
	"slices"
)

// wayDrivers reads what a way ends in: the name of a driver, or several joined in the arrangement's own words,
// "upper | lower". Each is a table of its own, even if they are of one make, because each has a place of its own.
func (p *parser) wayDrivers(w *Way, r *tableReader) {
	if nameFault(w.Driver) != "" && p.design.Driver(w.Driver) != nil {
		return // a name that cannot be one has been reported where it is given
	}
	c := p.cursor(r.table.index["driver"].value)
	names := map[string]bool{}
	x, ok := c.sum(0, func(t token) bool { return c.useDriver(t, r.label, names) })
	if !ok {
		return
	}
	if rest := c.peek(); rest.text != "" {
		c.failAt(rest, fmt.Sprintf("%s: its driver is complete before %s", r.label, found(rest)), `join several by + in series or by | in parallel, such as "upper | lower"`)
		return
	}
	if w.Driver = x.String(); x.Op != Leaf {
		w.Drivers = x
	}
}

// useDriver checks that a token names a driver that is defined and that no way has yet. already holds those
// that this way, called label in messages, has; useDriver adds the driver to it.
func (c *cursor) useDriver(t token, label string, already map[string]bool) bool {
	name := t.text
	defined := c.design.Driver(name) != nil
	switch {
	case !defined && nameFault(name) != "":
		c.failAt(t, fmt.Sprintf("%s: the name of a driver is missing before %s", label, found(t)), c.design.driverList())
		return false
	case !defined && !c.lost["driver"]:
		mend := fmt.Sprintf("add a table [driver.%s]", shortened(name))
		if names := c.design.driverNames(); len(names) > 0 {
			mend = didYouMean(name, names, c.design.driverList())
		}
		c.failAt(t, fmt.Sprintf("%s has the driver %q, which is not defined", label, shortened(name)), mend)
	}
	if already[name] {
		c.failAt(t, fmt.Sprintf("%s has the driver %q twice", label, shortened(name)),
			"define it twice, as two [driver.NAME] tables, since each stands in a place of its own")
		return true
	}
	already[name] = true
	for i := range c.design.Ways {
		if other := &c.design.Ways[i]; slices.Contains(other.DriverNames(), name) {
			c.failAt(t, fmt.Sprintf("%s has the driver %q, which way %q has already", label, shortened(name), shortened(other.Name)),
				"give each way a driver of its own; two of a kind are two [driver.NAME] tables")
			break
		}
	}
	return true
}

func (d *Design) driverNames() []string {
	names := make([]string, len(d.Drivers))
	for i := range d.Drivers {
		names[i] = d.Drivers[i].Name
	}
	return names
}

func (d *Design) driverList() string {
	if len(d.Drivers) == 0 {
		return "the file defines none; add a table [driver.NAME]"
	}
	return "the drivers are " + listed(d.driverNames())
}
