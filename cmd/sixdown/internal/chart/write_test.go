package chart

import (
	"bytes"
	"encoding/xml"
	"errors"
	"flag"
	"image"
	"image/color"
	"image/png"
	"io"
	"math"
	"os"
	"os/exec"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "rewrite the goldens")

// svgOf returns a page as SVG.
func svgOf(t testing.TB, p *Page, theme Theme, width int) string {
	t.Helper()
	var b bytes.Buffer
	if err := p.WriteSVG(&b, theme, width); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// TestGolden compares a small page with its golden, whose numbers may differ by the last of their two decimals, for
// processors round differently.
func TestGolden(t *testing.T) {
	s := twoWay(t, grid(60), 30)
	p := &Page{Title: "Pair", Caption: []string{"two ways, 30° apart"}, Panels: append([]Panel{Response([]*Subject{s}, "dB SPL"), Phase([]*Subject{s}, "at the ear")}, append(Phasors(s), Null(s))...)}
	got := svgOf(t, p, Auto, 900)
	const path = "testdata/pair.svg"
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	golden, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	numbers := regexp.MustCompile(`-?\d+(\.\d+)?`)
	want := string(golden)
	if numbers.ReplaceAllString(got, "0") != numbers.ReplaceAllString(want, "0") {
		t.Fatal("the picture has other marks than its golden; look at it, and write it anew with -update")
	}
	g, w := numbers.FindAllString(got, -1), numbers.FindAllString(want, -1)
	for i := range g {
		a, errA := strconv.ParseFloat(g[i], 64)
		b, errB := strconv.ParseFloat(w[i], 64)
		if err := errors.Join(errA, errB); err != nil {
			t.Fatal(err)
		}
		if math.Abs(a-b) > 0.011 {
			t.Fatalf("number %d is %s and not %s; look at the picture, and write the golden anew with -update", i, g[i], w[i])
		}
	}
}

// TestSameBytes: the same page gives the same file each time.
func TestSameBytes(t *testing.T) {
	p := pageOf(t, threeWay(t, grid(100)))
	for name, write := range map[string]func(io.Writer) error{
		"SVG": func(w io.Writer) error { return p.WriteSVG(w, Auto, 1200) },
		"PNG": func(w io.Writer) error { return p.WritePNG(w, Dark, 400) },
		"PDF": func(w io.Writer) error { return p.WritePDF(w, Light) },
	} {
		var a, b bytes.Buffer
		if err := errors.Join(write(&a), write(&b)); err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if a.Len() == 0 || !bytes.Equal(a.Bytes(), b.Bytes()) {
			t.Errorf("%s: %d bytes, then %d others", name, a.Len(), b.Len())
		}
	}
}

// TestSVG: it is XML, its texts are texts, and every class that a mark has gets a colour in either theme.
func TestSVG(t *testing.T) {
	p := pageOf(t, twoWay(t, grid(100), 20))
	p.Title = `<A> & "B"`
	doc := svgOf(t, p, Auto, 1200)
	texts := map[string]bool{}
	d := xml.NewDecoder(strings.NewReader(doc))
	inText := false
	for {
		token, err := d.Token()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			t.Fatalf("it is no XML: %v", err)
		}
		switch e := token.(type) {
		case xml.StartElement:
			inText = e.Name.Local == "text"
		case xml.CharData:
			if inText {
				texts[string(e)] = true
			}
			inText = false
		}
	}
	for _, want := range []string{`<A> & "B"`, "Response", "Step", "20 Hz", "20 kHz", "180°", "low", "high", "sum"} {
		if !texts[want] {
			t.Errorf("the text %q is missing", want)
		}
	}
	light, dark, ok := strings.Cut(doc[:strings.Index(doc, "</style>")], "prefers-color-scheme:dark")
	if !ok {
		t.Fatal("there is no dark theme")
	}
	for _, m := range regexp.MustCompile(`class="([sf]\d+)"`).FindAllStringSubmatch(doc, -1) {
		if rule := "." + m[1] + "{"; !strings.Contains(light, rule) || !strings.Contains(dark, rule) {
			t.Errorf("the class %s has no colour in one of the themes", m[1])
		}
	}
	if strings.Contains(doc, "style=") {
		t.Error("a mark has a style of its own, which a strict content policy refuses")
	}
	for theme, has := range map[Theme]bool{Light: false, Dark: false, Auto: true} {
		if strings.Contains(svgOf(t, p, theme, 0), "@media") != has {
			t.Errorf("theme %d: a choice of theme is where it must not be, or is not where it must", theme)
		}
	}
	if strings.Contains(svgOf(t, p, Light, 0)[:200], "width=") {
		t.Error("width 0 states a width")
	}
}

// TestPNG: it is as wide as asked, in the theme's paper, and curves are drawn in their inks.
func TestPNG(t *testing.T) {
	p := pageOf(t, twoWay(t, grid(100), 20))
	for _, theme := range []Theme{Light, Dark} {
		var b bytes.Buffer
		if err := p.WritePNG(&b, theme, 800); err != nil {
			t.Fatal(err)
		}
		img, err := png.Decode(&b)
		if err != nil {
			t.Fatal(err)
		}
		if got := img.Bounds().Dx(); got != 800 {
			t.Errorf("it is %d pixels wide, want 800", got)
		}
		if got := color.RGBAModel.Convert(img.At(2, 2)); got != theme.colour(paper) {
			t.Errorf("its corner is %v and not paper", got)
		}
		for _, i := range []ink{total, way1, way2, heat0, heat0 + heatSteps - 1, writing} {
			if n := pixels(img, theme.colour(i)); n < 20 {
				t.Errorf("theme %d: %d pixels have the colour of ink %d", theme, n, i)
			}
		}
	}
	if err := p.WritePNG(io.Discard, Light, 0); err == nil {
		t.Error("a width of 0 is drawn")
	}
}

// pixels counts the pixels of a colour.
func pixels(img image.Image, c color.RGBA) int {
	n := 0
	for y := img.Bounds().Min.Y; y < img.Bounds().Max.Y; y++ {
		for x := img.Bounds().Min.X; x < img.Bounds().Max.X; x++ {
			if color.RGBAModel.Convert(img.At(x, y)) == c {
				n++
			}
		}
	}
	return n
}

// TestPDF has pdftotext of Poppler read the document.
func TestPDF(t *testing.T) {
	tool, err := exec.LookPath("pdftotext")
	if err != nil {
		skipWithout(t, "pdftotext")
	}
	var b, out bytes.Buffer
	if err := pageOf(t, twoWay(t, grid(100), 20)).WritePDF(&b, Light); err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(tool, "-enc", "UTF-8", "-", "-")
	cmd.Stdin, cmd.Stdout, cmd.Stderr = &b, &out, os.Stderr
	if err := cmd.Run(); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"All of it: 10 Ω, 4.7 µF, −6 dB, 90°", "Input impedance", "−180°", "20 kHz"} {
		if !strings.Contains(out.String(), want) {
			t.Errorf("the text %q is missing", want)
		}
	}
}

// skipWithout skips a test that needs an external program, but not where everything must be there.
func skipWithout(t *testing.T, what string) {
	t.Helper()
	if os.Getenv("CI") != "" {
		t.Fatalf("%s is missing", what)
	}
	t.Skipf("%s is missing", what)
}

// A failingWriter takes nothing.
type failingWriter struct{}

func (failingWriter) Write([]byte) (int, error) { return 0, errors.New("full") }

func TestWritersPassErrorsOn(t *testing.T) {
	p := &Page{Title: "Empty"}
	for name, err := range map[string]error{
		"SVG": p.WriteSVG(failingWriter{}, Auto, 0),
		"PNG": p.WritePNG(failingWriter{}, Light, 100),
		"PDF": p.WritePDF(failingWriter{}, Light),
	} {
		if err == nil || !strings.Contains(err.Error(), "full") {
			t.Errorf("%s: the error is %v", name, err)
		}
	}
}
