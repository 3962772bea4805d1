package cli

import (
	"bytes"
	"fmt"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/chart"
)

// pictureOptions say where a picture goes and how it looks.
type pictureOptions struct {
	path  string // "": none
	theme string
	width int
}

// The widest picture that may be asked for, in pixels.
const maxChartWidth = 8000

func (o *pictureOptions) addTo(cmd *cobra.Command) {
	cmd.Flags().StringVar(&o.path, "chart", "", "draw the answer into this `file`: .svg, .png or .pdf")
	cmd.Flags().StringVar(&o.theme, "theme", "auto", "draw in the `theme` light or dark; auto lets the reader of an SVG choose")
	cmd.Flags().IntVar(&o.width, "width", 1200, "draw that many `pixels` wide; a PDF is on A4")
	complete(cmd, "theme", []string{"auto", "light", "dark"})
}

// complete lets the shell complete a flag's value.
func complete(cmd *cobra.Command, flag string, choices []string) {
	if err := cmd.RegisterFlagCompletionFunc(flag, cobra.FixedCompletions(choices, cobra.ShellCompDirectiveNoFileComp)); err != nil {
		panic(err) // a slip: the flag has not been declared
	}
}

// check judges the options before anything is computed. Flags, and those named in more, have no meaning without a picture.
func (o *pictureOptions) check(cmd *cobra.Command, more ...string) error {
	if o.path == "" {
		for _, name := range append(more, "theme", "width") {
			if cmd.Flags().Changed(name) {
				return usageFault("--"+name, "it is about a picture, and none is asked for", "give --chart too, as in --chart harbour.svg")
			}
		}
		return nil
	}
	if !slices.Contains([]string{".svg", ".png", ".pdf"}, o.format()) {
		return usageFault("--chart "+o.path, "the name does not say what kind of picture it is", "end it in .svg, .png or .pdf")
	}
	if _, err := chart.ParseTheme(o.theme); err != nil {
		return usageFault("--theme", fmt.Sprintf("there is no theme %q", o.theme), didYouMean(o.theme, []string{"auto", "light", "dark"}, "give auto, light or dark"))
	}
	if o.width < 100 || o.width > maxChartWidth {
		return usageFault("--width", fmt.Sprintf("%d pixels cannot be drawn", o.width), fmt.Sprintf("give 100 to %d", maxChartWidth))
	}
	return nil
}

// format is the ending of the file's name, which says what kind of picture it is.
func (o *pictureOptions) format() string { return strings.ToLower(filepath.Ext(o.path)) }

// write writes a page to the file. inputs must not be overwritten by it.
func (o *pictureOptions) write(page *chart.Page, inputs ...string) error {
	theme, err := chart.ParseTheme(o.theme)
	if err != nil {
		return err
	}
	var b bytes.Buffer
	switch o.format() {
	case ".svg":
		err = page.WriteSVG(&b, theme, o.width)
	case ".png":
		err = page.WritePNG(&b, theme, o.width)
	default:
		err = page.WritePDF(&b, theme)
	}
	if err != nil {
		return err
	}
	return writeOutput(o.path, b.Bytes(), inputs...)
}
