package cli

import (
	"strings"

	"github.com/spf13/cobra"
)

// newDesignTopic makes "help design", which explains the design file and does nothing else.
func newDesignTopic() *cobra.Command {
	c := &cobra.Command{
		Use:   "design",
		Short: "The design file: every table and key, its unit and its default",
		Long:  designHelp(),
	}
	c.SetHelpTemplate("{{.Long}}")
	return c
}

// designHelp is the text of the topic.
func designHelp() string {
	var b strings.Builder
	b.WriteString(designHelpHead)
	for _, t := range helpTables() {
		b.WriteString("\n" + t.text())
	}
	b.WriteString(designHelpTail)
	return b.String()
}

const (
	helpColumn = 30 // where what is said of a key begins
	helpWidth  = 88
)

// text is what the help says of one table.
func (t *helpTable) text() string {
	var b strings.Builder
	b.WriteString(t.head + "\n")
	if t.about != "" {
		b.WriteString("  " + strings.ReplaceAll(t.about, "\n", "\n  ") + "\n")
	}
	for _, k := range t.keys {
		line := "  " + k.name + " = " + k.example
		about := k.about
		if k.preset != "" {
			about += "; default~" + strings.NewReplacer(`"`, "", "[", "", "]", "", " ", "~").Replace(k.preset)
		}
		for i, part := range wrapped(about, helpWidth-helpColumn) {
			if i > 0 || len([]rune(line)) > helpColumn-2 {
				b.WriteString(line + "\n")
				line = ""
			}
			line += strings.Repeat(" ", helpColumn-len([]rune(line))) + part
		}
		b.WriteString(line + "\n")
	}
	return b.String()
}

// wrapped breaks a text at blanks into lines of at most width characters, one word at least. A ~ becomes a blank at
// which it does not break.
func wrapped(text string, width int) (lines []string) {
	line := ""
	for word := range strings.FieldsSeq(text) {
		if line != "" && len([]rune(line))+1+len([]rune(word)) > width {
			lines, line = append(lines, line), ""
		}
		line = strings.TrimPrefix(line+" "+word, " ")
	}
	lines = append(lines, line)
	for i := range lines {
		lines[i] = strings.ReplaceAll(lines[i], "~", " ")
	}
	return lines
}

const designHelpHead = `A design is a TOML file. What has a unit is a string with the unit in it: "4.7 uF",
"0.33 mH", "8 ohm", "2.2 kHz", "250 mm", "12 l", "132 cm2", "87 dB", "5 %"; what has none,
such as a Q, is a bare number. Names are letters, digits, _ and -, a letter first. Places
are counted from the cabinet's origin: x to the right and y up as the listener sees it, z
toward the listener. A key that is left out has its default. This is a whole design:

  title = "Harbour"

  [parts]
  L1 = "0.56 mH"
  C1 = "5.6 uF"

  [driver.woofer]
  re = "5.8 ohm"
  sensitivity = "87 dB"

  [driver.tweeter]
  impedance = "6 ohm"
  sensitivity = "88 dB"

  [[way]]
  name = "low"
  driver = "woofer"
  network = ["series L1"]

  [[way]]
  name = "high"
  driver = "tweeter"
  network = ["series C1"]

Every table and key follows, with an example. Before all tables, title names the design.
`

const designHelpTail = `
A target is "low-pass SHAPE ORDER at FREQUENCY" or "high-pass ...":
  low-pass linkwitz-riley 4 at 2.2 kHz            order 2, 4, 6 or 8
  low-pass butterworth 3 at 2.2 kHz               order 1 to 8, as are those below
  low-pass bessel 4 at 2.2 kHz                    its -3 dB point, or
  low-pass bessel 4 reference phase at 2.2 kHz    phase or delay
  low-pass chebyshev 3 ripple 0.5 dB at 2.2 kHz   0.001 to 10 dB

A network is read from the amplifier to the driver; its steps are
  series X                      X leads from the present node to the next
  shunt X                       X goes from the present node to the return
  mark a                        names the present node
  X from a to b                 X lies between two nodes
  driver from a to b            so does the driver, instead of at the end
  P1 from a to c wiper b        a potentiometer with its wiper
  couple L1 L2 0.02             the coupling of two coils, -1 to 1; positive if currents
                                that flow as the steps are written aid each other
X is a part, A + B in series, A | B in parallel (which binds tighter), or either in
brackets. Nodes are amp and 0, the amplifier's terminals; names, each that of one node of
its way; and way.node, that of another way. Each part is used once; a second one like it
has a name of its own and same.

Several drivers of one way, each with a table and a place (at) of its own, are joined as
parts are: driver = "upper | lower", or "upper + lower". Their polarity is the way's. To
reverse one of a pair, give it a way of its own, at a node of the other's:

  [[way]]
  name = "upper"
  driver = "upper"
  network = ["series L1", "shunt C1", "mark hot"]

  [[way]]
  name = "lower"
  driver = "lower"
  polarity = "reversed"
  network = ["driver from upper.hot to 0"]

In series with it instead, let the first way end in "driver from hot to mid" and the
second have "driver from upper.mid to 0".
`
