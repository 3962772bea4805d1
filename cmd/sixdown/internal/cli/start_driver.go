package cli

import (
	"fmt"
	"math"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"sixdown/xover"
	"sixdown/xover/quantity"
)

// A startDriver is a driver as --driver states it.
type startDriver struct {
	name   string
	values []driverValue // in the order given
}

// A driverValue is one key of a driver in the design file.
type driverValue struct {
	key  string
	text string  // as the file has it
	si   float64 // 0 for a file and a box
	path string  // of a file, from the folder of the design file
	box  xover.Box
}

// A driverKey is a key that --driver takes.
type driverKey struct {
	name string
	unit quantity.Unit // of its value; None: a bare number
	file bool          // it names a table, or, for impedance, a resistance
}

// The keys that say what box a driver stands in: closed:14l, vented:40l/32Hz.
const (
	closedKey = "closed"
	ventedKey = "vented"
)

func driverKeys() []driverKey {
	return []driverKey{
		{name: "impedance", unit: quantity.Ohm, file: true},
		{name: "response", file: true},
		{name: "re", unit: quantity.Ohm},
		{name: "le", unit: quantity.Henry},
		{name: "fs", unit: quantity.Hertz},
		{name: "qms"},
		{name: "qes"},
		{name: "vas", unit: quantity.CubicMetre},
		{name: "sd", unit: quantity.SquareMetre},
		{name: "diameter", unit: quantity.Metre},
		{name: "xmax", unit: quantity.Metre},
		{name: "sensitivity", unit: quantity.Decibel},
		{name: closedKey, unit: quantity.CubicMetre},
		{name: ventedKey, unit: quantity.CubicMetre},
	}
}

// parseStartDriver reads "tweeter=re:5.4ohm,fs:850Hz", "woofer=8ohm" or "woofer=w.zma,w.frd".
func parseStartDriver(text string) (startDriver, error) {
	name, list, ok := strings.Cut(text, "=")
	if name = strings.TrimSpace(name); !ok || name == "" {
		return startDriver{}, usageFault("--driver", fmt.Sprintf("%q names no driver and what it is", text), "write it as in --driver woofer=8ohm or --driver tweeter=re:5.4ohm,sensitivity:91dB")
	}
	if err := xover.CheckName(name); err != nil {
		return startDriver{}, &fault{code: exitUsage, text: fmt.Sprintf("--driver %q: %s", name, err), err: err}
	}
	d := startDriver{name: name}
	for item := range strings.SplitSeq(list, ",") {
		v, err := parseDriverValue(name, strings.TrimSpace(item))
		if err != nil {
			return startDriver{}, err
		}
		if d.value(v.key) != nil {
			return startDriver{}, usageFault("--driver "+name, v.key+" is given twice", "give it once")
		}
		d.values = append(d.values, v)
	}
	return d, nil
}

func (d *startDriver) value(key string) *driverValue {
	for i := range d.values {
		if d.values[i].key == key {
			return &d.values[i]
		}
	}
	return nil
}

// parseDriverValue reads one item of the driver called name: key:value, a table's name, or a resistance.
func parseDriverValue(name, item string) (driverValue, error) {
	keys := driverKeys()
	key, value, ok := strings.Cut(item, ":")
	// A single letter before the colon is a drive of the machine, and what follows a path.
	if !ok || len(key) == 1 {
		switch strings.ToLower(filepath.Ext(item)) {
		case ".zma":
			return driverValue{key: "impedance", text: item}, nil
		case ".frd":
			return driverValue{key: "response", text: item}, nil
		}
		key, value = "impedance", item
	}
	key, value = strings.TrimSpace(key), strings.TrimSpace(value)
	i := slices.IndexFunc(keys, func(k driverKey) bool { return k.name == key })
	if i < 0 {
		var names []string
		for _, k := range keys {
			names = append(names, k.name)
		}
		return driverValue{}, usageFault("--driver "+name, fmt.Sprintf("there is no key %q", key), didYouMean(key, names, "the keys are "+strings.Join(names, ", ")))
	}
	if keys[i].file && strings.Contains(filepath.Base(value), ".") && !isResistance(value) {
		return driverValue{key: key, text: value}, nil
	}
	if key == "response" {
		return driverValue{}, usageFault("--driver "+name, fmt.Sprintf("%q is no file of a response", value), "name a table with its ending, as in woofer.frd")
	}
	if keys[i].unit == quantity.None {
		v, err := strconv.ParseFloat(value, 64)
		if err != nil || !(v > 0) || math.IsInf(v, 1) {
			return driverValue{}, usageFault("--driver "+name, fmt.Sprintf("%s is %q", key, value), "give a positive number")
		}
		return driverValue{key: key, text: number(v).csv(), si: v}, nil
	}
	if key == closedKey || key == ventedKey {
		return parseBox(name, key, value)
	}
	v, err := parseSheetValue(name, key, value, keys[i].unit)
	return driverValue{key: key, text: tomlString(quantity.Format(v, keys[i].unit)), si: v}, err
}

// parseSheetValue reads a number of the data sheet. Levels alone may be negative.
func parseSheetValue(name, key, value string, unit quantity.Unit) (float64, error) {
	v, err := quantity.ParseAs(value, unit)
	if err != nil {
		return 0, fmt.Errorf("--driver %s: %s: %w", name, key, err)
	}
	if unit != quantity.Decibel && !(v > 0) {
		return 0, usageFault("--driver "+name, fmt.Sprintf("%s is %s", key, quantity.Format(v, unit)), "give a positive value, or leave it out")
	}
	return v, nil
}

// parseBox reads the box of a driver: its volume, and for a vented one a stroke and what the vent is tuned to.
func parseBox(name, key, value string) (driverValue, error) {
	box := xover.Box{Kind: xover.ClosedBox}
	volume, tuning, tuned := strings.Cut(value, "/")
	if tuned != (key == ventedKey) {
		return driverValue{}, usageFault("--driver "+name, fmt.Sprintf("%s is %q", key, value), "write closed:14l for a volume, or vented:40l/32Hz for a volume and what the vent is tuned to")
	}
	var err error
	if box.Volume, err = parseSheetValue(name, key, strings.TrimSpace(volume), quantity.CubicMetre); err != nil {
		return driverValue{}, err
	}
	text := fmt.Sprintf("{ kind = %q, volume = %s", key, tomlString(quantity.Format(box.Volume, quantity.CubicMetre)))
	if tuned {
		box.Kind = xover.VentedBox
		if box.Tuning, err = parseSheetValue(name, key, strings.TrimSpace(tuning), quantity.Hertz); err != nil {
			return driverValue{}, err
		}
		text += ", tuning = " + tomlString(quantity.Format(box.Tuning, quantity.Hertz))
	}
	return driverValue{key: "box", text: text + " }", box: box}, nil
}

// box is what the driver stands in; the zero Box: nothing is said.
func (d *startDriver) box() xover.Box {
	if v := d.value("box"); v != nil {
		return v.box
	}
	return xover.Box{}
}

// number returns what is said of a key, in SI units; 0: nothing.
func (d *startDriver) number(key string) float64 {
	if v := d.value(key); v != nil {
		return v.si
	}
	return 0
}

// isResistance tells a resistance, "5.6 ohm", from a file's name.
func isResistance(text string) bool {
	_, err := quantity.ParseAs(text, quantity.Ohm)
	return err == nil
}
