package cli

import (
	"fmt"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/chart"
	"sixdown/cmd/sixdown/internal/table"
	"sixdown/sim"
	"sixdown/sim/field"
	"sixdown/xover"
)

// aroundOptions ask what is heard elsewhere than straight ahead.
type aroundOptions struct {
	angleText string // "h=30,v=-10"; "": straight ahead
	angle     field.Angle
	polar     string // "horizontal" or "vertical"; "": no
	curves    bool
}

func (o *aroundOptions) addTo(cmd *cobra.Command) {
	cmd.Flags().StringVar(&o.angleText, "angle", "", "turn the ear by these `degrees` about the origin, right and up, as in h=30,v=-10")
	cmd.Flags().StringVar(&o.polar, "polar", "", "print the sum at all angles of a `plane`, horizontal or vertical, re straight ahead")
	cmd.Flags().BoolVar(&o.curves, "around", false, "print the means over many angles of ANSI/CTA-2034-A")
	choices := cobra.FixedCompletions([]string{"horizontal", "vertical"}, cobra.ShellCompDirectiveNoFileComp)
	if err := cmd.RegisterFlagCompletionFunc("polar", choices); err != nil {
		panic(err) // a slip: the flag is declared above
	}
}

// check judges the options before anything is computed.
func (o *aroundOptions) check(against, chart string, panels []string) error {
	if o.polar != "" && o.polar != "horizontal" && o.polar != "vertical" {
		return usageFault("--polar", fmt.Sprintf("there is no plane %q", o.polar), didYouMean(o.polar, []string{"horizontal", "vertical"}, "give horizontal or vertical"))
	}
	if o.polar != "" && o.curves {
		return usageFault("command line", "both --polar and --around are given", "give one of them")
	}
	if name := o.table(); name != "" {
		switch {
		case against != "":
			return usageFault(name, "two designs are given", "give one; the table is of a single design")
		case chart != "" && o.polar != "":
			return usageFault(name, "it prints a table, and --chart asks for a picture", "leave one of them out; --panels polar draws the polar maps")
		case chart != "" && len(panels) > 0:
			return usageFault("--panels", "--around draws pictures of its own", "leave one of them out")
		case o.angleText != "":
			return usageFault(name, "it goes all round, and --angle asks for one angle", "leave one of them out")
		}
	}
	return o.readAngle()
}

// table is the flag that asks for another table than predict's own; "" if none does.
func (o *aroundOptions) table() string {
	switch {
	case o.polar != "":
		return "--polar"
	case o.curves:
		return "--around"
	}
	return ""
}

// readAngle reads --angle.
func (o *aroundOptions) readAngle() error {
	if o.angleText == "" {
		return nil
	}
	a, ok := xover.ParseEarAngle(o.angleText)
	if !ok {
		return usageFault("--angle", fmt.Sprintf("%q is no angle", o.angleText), "write degrees from -180 to 180 without a unit, as in --angle h=30,v=-10, right and up; either may be left out")
	}
	o.angle = field.Angle(a)
	return nil
}

// turned is loadSystem's answer with the ear turned.
func (o *aroundOptions) turned(d *xover.Design, sys *sim.System, err error) (*xover.Design, *sim.System, error) {
	if err != nil || o.angle == (field.Angle{}) {
		return d, sys, err
	}
	sys, err = sys.Turned(o.angle)
	return d, sys, err
}

// angleText says where the ear is, if not straight ahead.
func angleText(a field.Angle) string {
	side := func(deg float64, positive, negative string) []string {
		switch {
		case deg > 0:
			return []string{figures(deg, 5) + "° " + positive}
		case deg < 0:
			return []string{figures(-deg, 5) + "° " + negative}
		}
		return nil
	}
	return strings.Join(slices.Concat(side(a.HorizontalDeg, "to the right", "to the left"), side(a.VerticalDeg, "up", "down")), ", ")
}

// The JSON documents of predict --polar and --around.
type (
	angleDocument struct {
		HorizontalDeg number `json:"horizontal_deg"`
		VerticalDeg   number `json:"vertical_deg"`
	}
	polarDocument struct {
		Title       string     `json:"title"`
		Plane       string     `json:"plane"`
		FrequencyHz []number   `json:"frequency_hz"`
		AngleDeg    []number   `json:"angle_deg"`
		LevelDB     [][]number `json:"level_db"` // by angle, then by frequency; re straight ahead
		Warnings    []string   `json:"warnings"`
	}
	aroundDocument struct {
		Title                string   `json:"title"`
		Basis                string   `json:"basis"` // measured, model or mixed
		Missing              []string `json:"missing"`
		FrequencyHz          []number `json:"frequency_hz"`
		OnAxisDB             []number `json:"on_axis_db"`
		ListeningWindowDB    []number `json:"listening_window_db"`
		FloorDB              []number `json:"floor_db"`
		CeilingDB            []number `json:"ceiling_db"`
		FrontWallDB          []number `json:"front_wall_db"`
		SideWallsDB          []number `json:"side_walls_db"`
		RearWallDB           []number `json:"rear_wall_db"`
		EarlyReflectionsDB   []number `json:"early_reflections_db"`
		SoundPowerDB         []number `json:"sound_power_db"`
		EarlyReflectionsDIDB []number `json:"early_reflections_di_db"`
		SoundPowerDIDB       []number `json:"sound_power_di_db"`
		InRoomDB             []number `json:"in_room_db"`
		Warnings             []string `json:"warnings"`
	}
)

// warnAll prints warnings and returns them behind those of the system.
func warnAll(s *streams, sys *sim.System, ws []string) []string {
	all := append([]string{}, sys.Warnings()...)
	for _, w := range ws {
		if !slices.Contains(all, w) {
			all = append(all, w)
			s.warn(w)
		}
	}
	return all
}

// runPolar prints the sum at all angles of a plane.
func runPolar(s *streams, o *predictOptions, sys *sim.System, freqs []float64) error {
	plane := sim.Horizontal
	if o.around.polar == "vertical" {
		plane = sim.Vertical
	}
	var degs []float64
	for deg := -180.0; deg <= 180; deg += 10 {
		degs = append(degs, deg)
	}
	p, err := sys.Polar(freqs, plane, degs)
	if err != nil {
		return err
	}
	warnings := warnAll(s, sys, p.Warnings)
	doc := polarDocument{Title: sys.Title(), Plane: o.around.polar, FrequencyHz: numbers(p.Freqs), AngleDeg: numbers(degs), Warnings: warnings}
	names, columns := []string{"frequency_hz"}, [][]number{doc.FrequencyHz}
	heads := []table.Column{{Name: "f", Unit: "Hz"}}
	for i, levels := range p.LevelDB {
		doc.LevelDB = append(doc.LevelDB, numbers(levels))
		names, columns = append(names, fmt.Sprintf("level_db_at_%g_deg", degs[i])), append(columns, numbers(levels))
		heads = append(heads, table.Column{Name: fmt.Sprintf("%g°", degs[i]), Unit: "dB"})
	}
	switch {
	case o.form.json:
		return s.answerJSON(doc)
	case o.form.csv:
		return s.answerCSV(csvRecords(names, columns))
	}
	t := table.New(heads...)
	for k, f := range p.Freqs {
		row := []string{figures(f, 5)}
		for i := range degs {
			row = append(row, fixed(p.LevelDB[i][k], 1))
		}
		t.Row(row...)
	}
	sides := "positive: to the right"
	if plane == sim.Vertical {
		sides = "positive: up"
	}
	return s.answer(fmt.Sprintf("Sum re straight ahead, %s plane, %s\n\n%s", o.around.polar, sides, t.Text(pageWidth)))
}

// runCurves prints the means over many angles.
func runCurves(s *streams, o *predictOptions, d *xover.Design, sys *sim.System, freqs []float64) error {
	c, err := sys.Curves(freqs)
	if err != nil {
		return err
	}
	doc := aroundDocument{
		Title: sys.Title(), Basis: c.Basis, Missing: append([]string{}, c.Missing...), FrequencyHz: numbers(c.Freqs),
		OnAxisDB: numbers(c.OnAxis), ListeningWindowDB: numbers(c.ListeningWindow), FloorDB: numbers(c.Floor), CeilingDB: numbers(c.Ceiling),
		FrontWallDB: numbers(c.FrontWall), SideWallsDB: numbers(c.SideWalls), RearWallDB: numbers(c.RearWall), EarlyReflectionsDB: numbers(c.EarlyReflections),
		SoundPowerDB: numbers(c.SoundPower), EarlyReflectionsDIDB: numbers(c.EarlyReflectionsDI), SoundPowerDIDB: numbers(c.SoundPowerDI), InRoomDB: numbers(c.InRoom),
		Warnings: warnAll(s, sys, c.Warnings),
	}
	names, columns := []string{"frequency_hz"}, [][]number{doc.FrequencyHz}
	heads := []table.Column{{Name: "f", Unit: "Hz"}}
	all := []struct {
		name, group, head string
		levels            []float64
	}{
		{"on_axis", "SPL", "axis", c.OnAxis}, {"listening_window", "SPL", "window", c.ListeningWindow}, {"early_reflections", "SPL", "early", c.EarlyReflections},
		{"sound_power", "SPL", "power", c.SoundPower}, {"in_room", "SPL", "in room", c.InRoom},
		{"early_reflections_di", "DI", "early", c.EarlyReflectionsDI}, {"sound_power_di", "DI", "power", c.SoundPowerDI},
		{"floor", "reflections", "floor", c.Floor}, {"ceiling", "reflections", "ceiling", c.Ceiling}, {"front_wall", "reflections", "front", c.FrontWall},
		{"side_walls", "reflections", "sides", c.SideWalls}, {"rear_wall", "reflections", "rear", c.RearWall},
	}
	for _, a := range all {
		names, columns = append(names, a.name+"_db"), append(columns, numbers(a.levels))
		heads = append(heads, table.Column{Group: a.group, Name: a.head, Unit: "dB"})
	}
	if o.chart.path != "" {
		if err := drawCurves(o, sys, freqs, "dB "+splConditions([]*prediction{{level: sys.Level(), distance: d.Listen.Distance}})); err != nil {
			return err
		}
	}
	switch {
	case o.form.json:
		return s.answerJSON(doc)
	case o.form.csv:
		return s.answerCSV(csvRecords(names, columns))
	}
	t := table.New(heads...)
	for k, f := range freqs {
		row := []string{figures(f, 5)}
		for _, a := range all {
			row = append(row, fixed(a.levels[k], 2))
		}
		t.Row(row...)
	}
	text := "Curves of ANSI/CTA-2034-A, directivity: " + c.Basis + "\n\n" + t.Text(pageWidth)
	for _, m := range c.Missing {
		text += "missing   " + m + "\n"
	}
	return s.answer(text)
}

// drawCurves draws the means over many angles over the span of freqs, more finely. levels says what the levels are.
func drawCurves(o *predictOptions, sys *sim.System, freqs []float64, levels string) error {
	from, to := slices.Min(freqs), slices.Max(freqs)
	if !(to > from) {
		return usageFault("--chart", "the curves are of one frequency", "give a span, --from and --to")
	}
	fine := gridOptions{from: from, to: to, perOctave: 24}
	c, err := sys.Curves(fine.even())
	if err != nil {
		return err
	}
	page := &chart.Page{Title: sys.Title(), Caption: c.Missing, Panels: chart.Around(c, levels)}
	if o.design.path == "-" {
		return o.chart.write(page)
	}
	return o.chart.write(page, o.design.path)
}
