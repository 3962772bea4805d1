package cli

import (
	"errors"
	"fmt"
	"io/fs"
	"math"
	"math/cmplx"
	"os"
	"path/filepath"
	"slices"

	"github.com/spf13/cobra"

	"sixdown/sim"
	"sixdown/sim/driver"
	"sixdown/xover"
)

// startOptions are what start is asked.
type startOptions struct {
	crossover  crossoverOptions
	ways       int // 0: as many as the frequencies make
	drivers    []string
	title      string
	compensate bool
	noPad      bool
	out        string // "": standard output
	tone       string
	force      bool
}

func newStartCmd(s *streams) *cobra.Command {
	var o startOptions
	cmd := &cobra.Command{
		Use:   "start",
		Short: "Write a design file to begin with, for these drivers and this crossover",
		Long: `Start writes a design file with a network sized for the drivers as resistances, with
targets, polarities, and pads where drivers differ in sensitivity. It is to be read
and changed; what may stand in it: sixdown help design.

Drivers are given from the lowest way to the highest, each as
  NAME=8ohm                      a resistance
  NAME=KEY:VALUE,KEY:VALUE,...   numbers of its data sheet: re, le, fs, qms, qes, vas,
                                 sd, diameter, xmax, sensitivity; and what it stands
                                 in, closed:VOLUME or vented:VOLUME/TUNING
  NAME=FILE.zma,FILE.frd         tables of its impedance and response
or a mixture. Without --load a way is sized for its driver's resistance or re; for a
table, for the magnitude of the impedance at the crossover.

With --tone it writes a tone network instead, with values to begin with:
` + toneKindsText(),
		Example: `  sixdown start --at 2.2kHz --shape linkwitz-riley --order 4 --driver woofer=8ohm --driver "tweeter=re:5.4ohm,sensitivity:91dB"
  sixdown start --at 400Hz,3kHz --arrangement all-pass --order 4 --driver b=8ohm --driver m=8ohm --driver t=8ohm --out three.toml
  sixdown start --tone bass-treble --out tone.toml`,
		Args: noArguments,
		RunE: func(cmd *cobra.Command, _ []string) error {
			if o.tone != "" {
				return runStartTone(cmd, s, &o)
			}
			if err := requireFlags(cmd, o.crossover.needed("driver")...); err != nil {
				return err
			}
			if err := o.crossover.check(); err != nil {
				return err
			}
			return runStart(s, &o)
		},
	}
	f := cmd.Flags()
	f.IntVar(&o.ways, "ways", 0, "how many `ways`; --at says it too")
	o.crossover.addTo(cmd)
	f.StringArrayVar(&o.drivers, "driver", nil, "a driver, as in `tweeter=re:5.4ohm,fs:850Hz`; once for each way")
	f.StringVar(&o.title, "title", "", "the design's `title`")
	f.BoolVar(&o.compensate, "compensate", false, "add across each driver the network that makes it the resistance re, where that does good")
	f.BoolVar(&o.noPad, "no-pad", false, "leave the levels of the drivers as they are")
	f.StringVar(&o.tone, "tone", "", "write a tone network of this `kind`")
	complete(cmd, "tone", toneKinds())
	f.StringVarP(&o.out, "out", "o", "", "`file` to write; standard output without it")
	f.BoolVar(&o.force, "force", false, "replace the file if it is there")
	return cmd
}

func runStart(s *streams, o *startOptions) error {
	n := len(o.crossover.at) + 1
	if o.ways != 0 && o.ways != n {
		return usageFault("--ways", fmt.Sprintf("%d ways have %d crossover frequencies, and --at gives %d", o.ways, o.ways-1, n-1), "give --at one frequency fewer than there are ways")
	}
	if len(o.drivers) != n {
		return usageFault("--driver", fmt.Sprintf("%s given for %d ways", counted(len(o.drivers), "driver"), n), "give one for each way, from the lowest to the highest")
	}
	if err := o.checkOut(); err != nil {
		return err
	}
	plan, err := o.plan()
	if err != nil {
		return err
	}
	for _, w := range plan.warnings {
		s.warn(w)
	}
	text := plan.text()
	if err := o.prove(s, text); err != nil {
		return err
	}
	return o.deliver(s, text)
}

// checkOut reports a file that would be replaced.
func (o *startOptions) checkOut() error {
	if o.out != "" && !o.force {
		if _, err := os.Lstat(o.out); !errors.Is(err, fs.ErrNotExist) {
			return usageFault(o.out, "it is there already", "give another name, or --force to replace it")
		}
	}
	return nil
}

// deliver writes the design to its file or to standard output.
func (o *startOptions) deliver(s *streams, text string) error {
	if o.out == "" {
		return s.answer(text)
	}
	if err := writeWhole(o.out, text); err != nil {
		return err
	}
	return s.answer(fmt.Sprintf("%s is written. To see what it does: sixdown predict %s\n", o.out, o.out))
}

// plan sizes the crossover for the drivers.
func (o *startOptions) plan() (*startPlan, error) {
	p := &startPlan{title: o.title}
	for _, text := range o.drivers {
		d, err := parseStartDriver(text)
		if err != nil {
			return nil, err
		}
		o.placeTables(&d)
		if slices.ContainsFunc(p.drivers, func(other startDriver) bool { return other.name == d.name }) {
			return nil, usageFault("--driver", fmt.Sprintf("%q is given twice", d.name), "give every driver a name of its own")
		}
		p.drivers = append(p.drivers, d)
	}
	if len(o.crossover.load) == 0 {
		for i := range p.drivers {
			load, err := o.loadOf(&p.drivers[i], i)
			if err != nil {
				return nil, err
			}
			o.crossover.load = append(o.crossover.load, load)
		}
	}
	c, err := o.crossover.size()
	if err != nil {
		return nil, err
	}
	if p.title == "" {
		p.title = c.title
	}
	return p, p.fill(c, o)
}

// placeTables makes the names of a driver's tables such that they are found from where the design file will be.
func (o *startOptions) placeTables(d *startDriver) {
	for i := range d.values {
		v := &d.values[i]
		if v.si != 0 || (v.key != "impedance" && v.key != "response") {
			continue
		}
		path := v.text
		if rel, err := filepath.Rel(o.dir(), path); err == nil && !filepath.IsAbs(path) {
			path = rel
		}
		v.text = tomlString(filepath.ToSlash(path))
		v.path = path
	}
}

// dir is the folder of the design file.
func (o *startOptions) dir() string {
	if o.out == "" {
		return "."
	}
	return filepath.Dir(o.out)
}

// loadOf returns the resistance in Ω for which way i is sized when nothing is said of it.
func (o *startOptions) loadOf(d *startDriver, i int) (float64, error) {
	if v := d.value("re"); v != nil {
		return v.si, checkLoad("--driver "+d.name, v.si)
	}
	v := d.value("impedance")
	switch {
	case v == nil:
		return 0, usageFault("--driver "+d.name, "nothing is said of its impedance", "give a resistance, re, or a table, as in "+d.name+"=8ohm")
	case v.si != 0:
		return v.si, checkLoad("--driver "+d.name, v.si)
	}
	r, err := tablesIn(o.dir())(v.path)
	if err != nil {
		return 0, err
	}
	defer r.Close() // it is only read
	table, err := driver.ReadTable(v.path, r)
	if err != nil {
		return 0, err
	}
	z, err := driver.NewImpedanceTable(table)
	if err != nil {
		return 0, err
	}
	// Between two crossovers, the middle of the way in log frequency.
	at := o.crossover.at[max(i-1, 0):min(i+1, len(o.crossover.at))]
	f := math.Sqrt(at[0] * at[len(at)-1])
	return cmplx.Abs(z.Impedance(complex(0, 2*math.Pi*f))), nil
}

// prove reads what is to be written as any design is read. A fault in it is one of the names or values given, so
// places in a file that is not there yet are left out.
func (o *startOptions) prove(s *streams, text string) error {
	d, warnings, err := xover.Parse("start", []byte(text))
	if faults, ok := errors.AsType[xover.Errors](err); ok {
		for _, f := range faults {
			f.Pos = xover.Position{}
		}
		return faults
	}
	for _, w := range warnings {
		w.Pos = xover.Position{}
		s.warn(w.String())
	}
	if _, err := sim.New(d, tablesIn(o.dir())); err != nil {
		s.warn(err.Error())
	}
	return nil
}

// writeWhole writes a file, or on failure nothing.
func writeWhole(path, text string) error {
	f, err := createOutput(path)
	if err != nil {
		return err
	}
	if _, err = f.WriteString(text); err != nil {
		err = errors.Join(err, f.Abort())
	} else {
		err = f.Commit()
	}
	if err != nil {
		return machineFault(path, err, "make room on the disk, or give another folder")
	}
	return nil
}
