package cli

import (
	"bytes"
	"cmp"
	"context"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/chart"
	"sixdown/cmd/sixdown/internal/table"
	"sixdown/sim/scout"
	"sixdown/xover"
)

// scoutOptions are what scout is asked.
type scoutOptions struct {
	design  designOptions
	form    answerForm
	out     string
	stock   string
	set     scout.Settings
	picture pictureOptions
}

func newScoutCmd(s *streams) *cobra.Command {
	var o scoutOptions
	cmd := &cobra.Command{
		Use:   "scout DESIGN [--out DIR]",
		Short: "Find which crossover points and arrangements are worth building",
		Long: `Scout takes the drivers of a design, their places, the ear and the amplifier; of its
ways only the order counts, the lowest first, two or three of them. It goes through
crossover points, targets, orders of the ladders, polarities and impedance compensation,
leaves out points that the drivers do not stand (below twice a tweeter's resonance and
more for low orders, where a diaphragm beams, where drivers are a wavelength apart:
common practice), tunes each arrangement, drops those that overdrive a driver's xmax at
the rated power or load the amplifier with less than [tune] min_impedance (3.2 ohm if it
states none), and shows those that no other beats in error, number of parts, lowest
impedance (in steps of 0.25 ohm) and, with the prices of a list,
cost at once. Coils are taken to have 0.35 ohm for 1 mH. The arrangements of a three-way
are too many: a short search chooses those that are tuned.

With --out it writes a design file for each of these, and copies the drivers' tables.`,
		Example:           "  sixdown scout harbour.toml --out scouted",
		Args:              oneDesign,
		ValidArgsFunction: designFiles,
		RunE: func(cmd *cobra.Command, args []string) error {
			o.design.path = args[0]
			if err := o.picture.check(cmd); err != nil {
				return err
			}
			return runScout(cmd.Context(), s, &o)
		},
	}
	f := cmd.Flags()
	f.StringVar(&o.out, "out", "", "write a design for each of the best to this `folder`")
	f.StringVar(&o.stock, "stock", "", "weigh the cost too, by the prices of this `list`")
	f.IntVar(&o.set.Starts, "starts", 24, "places that each tuning begins at")
	f.Uint64Var(&o.set.Seed, "seed", 1, "of these places")
	o.form.addTo(cmd)
	o.picture.addTo(cmd)
	return cmd
}

func runScout(ctx context.Context, s *streams, o *scoutOptions) error {
	if err := o.form.check(); err != nil {
		return err
	}
	if o.set.Starts < 1 || o.set.Starts > 10000 {
		return usageFault("--starts", fmt.Sprintf("%d places", o.set.Starts), "give 1 to 10000")
	}
	prices, err := readSource(o.stock)
	if err != nil {
		return err
	}
	o.set.Prices = prices
	name, src, err := readDesign(s, o.design.path)
	if err != nil {
		return err
	}
	d, err := o.design.parse(s, name, src)
	if err != nil {
		return err
	}
	if o.out != "" {
		if err := o.checkFolder(d); err != nil {
			return err
		}
	}
	bar := newProgress(s, "scouting")
	o.set.Progress = bar.at
	open := keptTables(tablesIn(o.design.folder()))
	r, err := scout.Scout(ctx, d, open, o.set)
	bar.done()
	if err != nil {
		return err
	}
	if r.Partial {
		s.warn(fmt.Sprintf("interrupted: this is of %d arrangements", r.Tuned))
	}
	files := map[int]string{}
	var writing error // told behind the answer, which is not lost with it
	if o.out != "" {
		files, writing = writeFinds(o, d, src, r)
	}
	if o.picture.path != "" && r.Tuned > r.Dropped {
		if err := o.picture.write(scoutPage(d.Title, r), o.design.path); err != nil {
			return err
		}
	}
	switch {
	case o.form.json:
		err = s.answerJSON(scoutAnswer(r, files))
	case o.form.csv:
		err = s.answerCSV(scoutRecords(r, files))
	default:
		err = s.answer(scoutText(r, files))
	}
	if err == nil {
		err = writing
	}
	return unlessInterrupted(r.Partial, err)
}

// mostFinds is how many of the frontier are shown and written, the least error first.
const mostFinds = 16

// shown returns the indices of the finds that are shown.
func shown(r *scout.Report) (some []int) {
	for i := range r.Finds {
		if r.Finds[i].Frontier && len(some) < mostFinds {
			some = append(some, i)
		}
	}
	return some
}

// checkFolder reports, before any work is done, what would be lost in the folder for the designs, or cannot be put there.
func (o *scoutOptions) checkFolder(d *xover.Design) error {
	if at, err := os.Stat(o.out); err == nil && !at.IsDir() {
		return usageFault("--out", o.out+" is a file", "give a folder")
	}
	if old, err := filepath.Glob(filepath.Join(o.out, "find-*.toml")); err == nil && len(old) > 0 {
		return usageFault("--out", fmt.Sprintf("%s is there already, of another scout", old[0]), "give another folder, or take the old designs away")
	}
	for _, name := range d.Files() {
		from := filepath.FromSlash(name)
		if filepath.IsAbs(from) {
			continue
		}
		if !filepath.IsLocal(from) {
			return usageFault("--out", fmt.Sprintf("the table %s is outside the design's folder", name), "move it beside the design, or give its whole path")
		}
		source, to := filepath.Join(o.design.folder(), from), filepath.Join(o.out, from)
		have, err := os.ReadFile(to)
		if err != nil {
			continue // it is not there
		}
		if want, err := os.ReadFile(source); err != nil || !bytes.Equal(have, want) {
			return usageFault("--out", fmt.Sprintf("%s is there already, and another table", to), "give another folder")
		}
	}
	return nil
}

// writeFinds writes the designs and copies the tables that they name. It returns the files by index.
func writeFinds(o *scoutOptions, d *xover.Design, src []byte, r *scout.Report) (map[int]string, error) {
	if err := os.MkdirAll(o.out, 0o755); err != nil {
		return nil, machineFault(o.out, err, "give a folder that can be made")
	}
	files := map[int]string{}
	for n, i := range shown(r) {
		text, err := xover.Rewrite(src, r.Finds[i].Design)
		if err != nil {
			return files, err
		}
		path := filepath.Join(o.out, fmt.Sprintf("find-%d.toml", n+1))
		if err := writeOutput(path, text, o.design.path); err != nil {
			return files, err
		}
		files[i] = path
	}
	for _, name := range d.Files() {
		from := filepath.FromSlash(name)
		if filepath.IsAbs(from) {
			continue
		}
		to := filepath.Join(o.out, from)
		if err := os.MkdirAll(filepath.Dir(to), 0o755); err != nil {
			return files, machineFault(to, err, "give a folder that can be made")
		}
		source := filepath.Join(o.design.folder(), from)
		text, err := os.ReadFile(source)
		if err != nil {
			return files, inputFault(source, err)
		}
		if have, err := os.ReadFile(to); err == nil && bytes.Equal(have, text) {
			continue
		}
		if err := writeOutput(to, text, source); err != nil {
			return files, err
		}
	}
	return files, nil
}

// writeOutput writes a file, whole or not at all.
func writeOutput(path string, text []byte, inputs ...string) error {
	out, err := createOutput(path, inputs...)
	if err != nil {
		return err
	}
	defer out.Abort()
	if _, err := out.Write(text); err != nil {
		return outputFault(path, err)
	}
	if err := out.Commit(); err != nil {
		return outputFault(path, err)
	}
	return nil
}

// keptTables keeps the text of tables, which hundreds of arrangements read.
func keptTables(open func(name string) (io.ReadCloser, error)) func(name string) (io.ReadCloser, error) {
	kept := newTextStore()
	return func(name string) (io.ReadCloser, error) {
		text, err := kept.get(name, func() (string, error) {
			r, err := open(name)
			if err != nil {
				return "", err
			}
			defer r.Close() // it was only read
			var b strings.Builder
			_, err = io.Copy(&b, r)
			return b.String(), err
		})
		if err != nil {
			return nil, err
		}
		return io.NopCloser(strings.NewReader(text)), nil
	}
}

// The JSON of scout.
type (
	findDocument struct {
		Name         string   `json:"name"`
		File         string   `json:"file,omitempty"`
		CrossoverHz  []number `json:"crossover_hz"`
		ErrorDB      number   `json:"error_db"` // square root of the tuner's objective
		SumRMSDB     number   `json:"sum_rms_db"`
		PhaseRMSDeg  number   `json:"phase_rms_deg"`
		Parts        int      `json:"parts"`
		Cost         number   `json:"cost"`               // null: not known
		Unpriced     string   `json:"unpriced,omitempty"` // the part of which the list has none near enough
		MinImpedance number   `json:"min_impedance_ohm"`
		Reversed     []string `json:"reversed"`
		ExcursionMM  number   `json:"excursion_mm"` // null: not known
		Frontier     bool     `json:"frontier"`
	}
	scoutDocument struct {
		Finds       []findDocument `json:"finds"`
		Limits      []string       `json:"limits"`
		Points      [][]number     `json:"points_hz"` // the crossover points that were tried
		Tried       int            `json:"tried"`     // looked at with a short search; 0: all were tuned
		Tuned       int            `json:"tuned"`
		Dropped     int            `json:"dropped"`
		Interrupted bool           `json:"interrupted"`
	}
)

func foundDocument(f *scout.Find, file string) findDocument {
	doc := findDocument{
		Name: f.Name, File: file, CrossoverHz: numbers(f.Points), ErrorDB: number(f.ErrorDB), SumRMSDB: number(f.Score.SumRMSDB),
		PhaseRMSDeg: number(f.Score.PhaseRMSDeg), Parts: f.Parts, Cost: number(math.NaN()), MinImpedance: number(f.Score.MinImpedance), Reversed: []string{},
		ExcursionMM: number(math.NaN()), Frontier: f.Frontier,
	}
	for i, w := range f.Design.Ways {
		if f.Reversed[i] {
			doc.Reversed = append(doc.Reversed, w.Name)
		}
	}
	if f.Cost >= 0 {
		doc.Cost = number(f.Cost)
	}
	doc.Unpriced = f.Unpriced
	if f.ExcursionFor != "" {
		doc.ExcursionMM = number(f.ExcursionMM)
	}
	return doc
}

func scoutAnswer(r *scout.Report, files map[int]string) scoutDocument {
	doc := scoutDocument{Finds: []findDocument{}, Limits: append([]string{}, r.Limits...), Points: [][]number{}, Tried: r.Tried, Tuned: r.Tuned, Dropped: r.Dropped, Interrupted: r.Partial}
	for _, p := range r.Points {
		doc.Points = append(doc.Points, numbers(p))
	}
	for i := range r.Finds {
		doc.Finds = append(doc.Finds, foundDocument(&r.Finds[i], files[i]))
	}
	return doc
}

func scoutRecords(r *scout.Report, files map[int]string) [][]string {
	rows := [][]string{{"name", "error_db", "sum_rms_db", "phase_rms_deg", "parts", "cost", "min_impedance_ohm", "reversed", "frontier", "file"}}
	for i := range r.Finds {
		f := foundDocument(&r.Finds[i], files[i])
		rows = append(rows, []string{f.Name, f.ErrorDB.csv(), f.SumRMSDB.csv(), f.PhaseRMSDeg.csv(), fmt.Sprint(f.Parts), f.Cost.csv(), f.MinImpedance.csv(), strings.Join(f.Reversed, " "), fmt.Sprint(f.Frontier), f.File})
	}
	return rows
}

// costText writes a cost, or for which part it is not known.
func costText(f *scout.Find) string {
	if f.Cost < 0 {
		return "no " + f.Unpriced
	}
	return fixed(f.Cost, 2)
}

// pointsText lists crossover points.
func pointsText(points [][]float64) string {
	said := make([]string, len(points))
	for i, p := range points {
		pair := make([]string, len(p))
		for k, f := range p {
			pair[k] = roughly(f)
		}
		said[i] = strings.Join(pair, " and ")
	}
	return strings.Join(said, "; ")
}

// scoutText is the answer for people.
func scoutText(r *scout.Report, files map[int]string) string {
	var b strings.Builder
	for _, l := range r.Limits {
		b.WriteString(folded("limit     ", l))
	}
	if r.Tuned == 0 {
		b.WriteString("          these leave no crossover point: choose drivers that overlap more\n")
		return b.String()
	}
	b.WriteString(folded("points    ", pointsText(r.Points)))
	if r.Tried > 0 {
		fmt.Fprintf(&b, "          %d arrangements looked at with a short search, the better ones tuned\n", r.Tried)
	}
	some := shown(r)
	fmt.Fprintf(&b, "%d arrangements tuned, %d of them dropped for the load or a driver's excursion; %d that no other beats:\n\n", r.Tuned, r.Dropped, len(some))
	priced := slices.ContainsFunc(r.Finds, func(f scout.Find) bool { return f.Cost >= 0 || f.Unpriced != "" })
	columns := []table.Column{{Name: "arrangement", Left: true}, {Name: "error", Unit: "dB"}, {Name: "sum", Unit: "dB"}, {Name: "phase", Unit: "°"}, {Name: "parts"}}
	if priced {
		columns = append(columns, table.Column{Name: "cost", Left: true})
	}
	t := table.New(append(columns, table.Column{Name: "|Z|", Unit: "Ω"}, table.Column{Name: "reversed", Left: true})...)
	for _, i := range some {
		f := foundDocument(&r.Finds[i], "")
		row := []string{f.Name, fixed(float64(f.ErrorDB), 2), fixed(float64(f.SumRMSDB), 2), fixed(float64(f.PhaseRMSDeg), 0), fmt.Sprint(f.Parts)}
		if priced {
			row = append(row, costText(&r.Finds[i]))
		}
		t.Row(append(row, fixed(float64(f.MinImpedance), 2), strings.Join(f.Reversed, " "))...)
	}
	b.WriteString(t.Text(2 * pageWidth))
	if len(files) > 0 {
		fmt.Fprintf(&b, "\nwritten   %s to %s\n", files[some[0]], files[some[len(some)-1]])
	} else {
		b.WriteString("\nnothing is written; --out DIR does\n")
	}
	b.WriteString("          spread, stress and your ears decide between them\n")
	return b.String()
}

// scoutPage is the answer as a picture: error against parts, and against the least impedance.
func scoutPage(title string, r *scout.Report) *chart.Page {
	some := shown(r)
	slices.SortStableFunc(some, func(a, b int) int { return cmp.Compare(r.Finds[a].Parts, r.Finds[b].Parts) })
	var parts, loads []chart.Mark
	for i := range r.Finds {
		f := &r.Finds[i]
		if !f.Frontier {
			parts = append(parts, chart.Mark{Across: float64(f.Parts), Up: f.ErrorDB})
			loads = append(loads, chart.Mark{Across: f.Score.MinImpedance, Up: f.ErrorDB})
		}
	}
	order := shown(r)
	for _, i := range some {
		f := &r.Finds[i]
		name := strconv.Itoa(1 + slices.Index(order, i))
		parts = append(parts, chart.Mark{Across: float64(f.Parts), Up: f.ErrorDB, Name: name})
		loads = append(loads, chart.Mark{Across: f.Score.MinImpedance, Up: f.ErrorDB, Name: name})
	}
	return &chart.Page{
		Title:   title,
		Caption: []string{fmt.Sprintf("%d arrangements tuned; %d that no other beats, numbered by error", r.Tuned, len(some))},
		Panels: []chart.Panel{
			chart.Frontier("Error and parts", "dB rms, and how many parts", " parts", " dB", parts, true),
			chart.Frontier("Error and load", "dB rms, and the least impedance in ohm", " Ω", " dB", loads, false),
		},
	}
}
