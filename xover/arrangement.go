package xover

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
	"unicode"
)

const (
	ampNode    = "amp" // the amplifier's hot terminal
	returnNode = "0"   // and its return
	outNode    = "out" // in a tone network, the node that the load sees
)

func isTerminal(node string) bool { return node == ampNode || node == returnNode }

// step reads one string of a network by recursive descent. drivers tells whether there is a driver to place.
// On a fault it reports it and ok is false.
func (p *parser) step(n *node, drivers bool) (s Step, ok bool) {
	c := p.cursor(n)
	first := c.peek()
	s.Pos = c.place(first)
	switch first.text {
	case "series", "shunt":
		c.take()
		if s.Op = Series; first.text == "shunt" {
			s.Op = Shunt
		}
		s.Expr, ok = c.expression()
	case "mark":
		c.take()
		s.Op = Mark
		s.Name, ok = c.mark()
	case "couple":
		c.take()
		s.Op = Couple
		ok = c.couple(&s)
	case "opamp":
		c.take()
		s.Op = OpAmp
		if drivers {
			c.failAt(first, "a way has no operational amplifier: it is passive, and feeds a driver", "leave it to a tone network")
			return s, false
		}
		ok = c.opAmp(&s)
	case "driver":
		c.take()
		s.Op = DriverPlace
		if !drivers {
			c.failAt(first, "a tone network has no driver", `name the node that the load sees "out"`)
			return s, false
		}
		ok = c.between(&s)
	default:
		s.Op = Between
		ok = c.placed(&s)
	}
	if !ok {
		return s, false
	}
	if rest := c.peek(); rest.text != "" {
		c.failAt(rest, fmt.Sprintf("the step is complete before %s", found(rest)), "write one step a string")
		return s, false
	}
	return s, true
}

// placed reads `X from a to b`, with `wiper c` perhaps.
func (c *cursor) placed(s *Step) (ok bool) {
	first := c.peek()
	if next := c.tokens[min(c.next+1, len(c.tokens)-1)].text; c.partAtToken(first) < 0 && first.text != "(" && next != "from" && next != "+" && next != "|" {
		verbs := []string{"series", "shunt", "mark", "couple", "driver", "opamp"}
		c.failAt(first, fmt.Sprintf("a step begins with %s", found(first)),
			didYouMean(first.text, verbs, `begin with series, shunt, mark, couple, driver or opamp, or write "X from a to b"`))
		return false
	}
	if s.Expr, ok = c.expression(); !ok {
		return false
	}
	if !c.between(s) {
		return false
	}
	if !c.accept("wiper") {
		return true
	}
	if s.Wiper, ok = c.node(); !ok {
		return false
	}
	if s.Expr.Op != Leaf {
		c.failAt(first, "a wiper belongs to one potentiometer, not to several parts", `write "P1 from a to b wiper c"`)
		return false
	}
	part := c.design.Part(s.Expr.Part)
	if part != nil && part.Kind != Potentiometer && !c.faulty[part.Name] {
		c.failAt(first, fmt.Sprintf("%s is %s, which has no wiper", part.Name, part.Kind.withArticle()), "give it a taper, or leave the wiper out")
		return false
	}
	return true
}

func (c *cursor) partAtToken(t token) int {
	if i, ok := c.partAt[t.text]; ok {
		return i
	}
	return -1
}

// between reads `from a to b`.
func (c *cursor) between(s *Step) (ok bool) {
	if !c.word("from", `write "from a to b" behind it, or series or shunt before it`) {
		return false
	}
	if s.From, ok = c.node(); !ok {
		return false
	}
	if !c.word("to", `write "from a to b"`) {
		return false
	}
	at := c.peek()
	if s.To, ok = c.node(); !ok {
		return false
	}
	if s.From == s.To {
		c.failAt(at, fmt.Sprintf("both ends are at %q", s.To), "name two nodes")
		return false
	}
	return true
}

// word takes a word that must come here.
func (c *cursor) word(word, mend string) bool {
	if t := c.peek(); !c.accept(word) {
		c.failAt(t, fmt.Sprintf("%q is missing before %s", word, found(t)), mend)
		return false
	}
	return true
}

// node reads the name of a node: amp, 0, a name, or way.name.
func (c *cursor) node() (name string, ok bool) {
	t := c.take()
	way, node, dotted := strings.Cut(t.text, ".")
	if !dotted {
		node = t.text
	}
	switch {
	case dotted && (nameFault(way) != "" || !isNodeName(node)), !isNodeName(node):
		c.failAt(t, fmt.Sprintf("the name of a node is missing before %s", found(t)), "write amp, 0, a name, or way.name")
		return "", false
	case dotted && isTerminal(node):
		c.failAt(t, fmt.Sprintf("%s is the amplifier's terminal in every way", node), fmt.Sprintf("write %s alone", node))
		return "", false
	}
	return t.text, true
}

// isNodeName tells a name that a node can have: that of a part, or one that begins with a digit.
func isNodeName(name string) bool {
	if name == "" || slices.Contains(keywords, name) {
		return false
	}
	if c := rune(name[0]); unicode.IsDigit(c) {
		name = "n" + name[1:]
	}
	return nameFault(name) == ""
}

// mark reads the name of `mark name`.
func (c *cursor) mark() (name string, ok bool) {
	t := c.take()
	switch {
	case !isNodeName(t.text):
		c.failAt(t, fmt.Sprintf("the name of a node is missing before %s", found(t)), `write "mark a"; a name has letters, digits, _ and -`)
		return "", false
	case isTerminal(t.text):
		c.failAt(t, fmt.Sprintf("%q is the amplifier's terminal", t.text), "give the node another name")
		return "", false
	}
	return t.text, true
}

// opAmp reads `A1 plus x minus y out z`.
func (c *cursor) opAmp(s *Step) bool {
	const mend = `write "opamp A1 plus x minus y out z"`
	t := c.take()
	if nameFault(t.text) != "" || slices.Contains(keywords, t.text) {
		c.failAt(t, fmt.Sprintf("the name of the operational amplifier is missing before %s", found(t)), mend)
		return false
	}
	s.Name = t.text
	for _, end := range []struct {
		word string
		node *string
	}{{"plus", &s.Plus}, {"minus", &s.Minus}, {"out", &s.Out}} {
		if !c.word(end.word, mend) {
			return false
		}
		at, ok := c.peek(), false
		if *end.node, ok = c.node(); !ok {
			return false
		}
		if end.word == "out" && isTerminal(*end.node) {
			c.failAt(at, fmt.Sprintf("its output is at %s, which another source holds", *end.node), "name another node")
			return false
		}
	}
	switch {
	case s.Plus == s.Minus:
		c.fail(s.Pos, fmt.Sprintf("both inputs of %s are at %q", s.Name, s.Plus), "name two nodes")
		return false
	case s.Plus == s.Out:
		c.fail(s.Pos, fmt.Sprintf("the output of %s goes straight to its plus input, which makes it latch", s.Name), "feed back to minus")
		return false
	}
	return true
}

// couple reads `L1 L2 0.02`.
func (c *cursor) couple(s *Step) bool {
	for _, dst := range []*string{&s.A, &s.B} {
		t := c.take()
		if !c.usePart(t) {
			return false
		}
		if part := c.design.Part(t.text); part.Kind != Inductor && !c.faulty[t.text] {
			c.failAt(t, fmt.Sprintf("%s is %s, and only coils couple", t.text, part.Kind.withArticle()), `write "couple L1 L2 0.02"`)
			return false
		}
		*dst = t.text
	}
	if s.A == s.B {
		c.fail(s.Pos, s.A+" is coupled to itself", "name two coils")
		return false
	}
	t := c.take()
	k, err := strconv.ParseFloat(t.text, 64)
	if err != nil || math.IsNaN(k) || strings.ContainsAny(t.text, "xX_") {
		c.failAt(t, fmt.Sprintf("the coupling coefficient is missing before %s", found(t)), `write a number between -1 and 1, "couple L1 L2 0.02"`)
		return false
	}
	if !(math.Abs(k) < 1) {
		c.failAt(t, fmt.Sprintf("the coupling coefficient is %s", shortened(t.text)), "write a number between -1 and 1; coils wound on one another may reach 0.9")
		return false
	}
	s.K = k
	return true
}

// usePart checks that a token names a part that is defined.
func (c *cursor) usePart(t token) bool {
	if c.partAtToken(t) >= 0 {
		return true
	}
	if nameFault(t.text) != "" || slices.Contains(keywords, t.text) {
		c.failAt(t, fmt.Sprintf("the name of a part is missing before %s", found(t)), c.design.partList())
		return false
	}
	c.failAt(t, fmt.Sprintf("%q is used and not defined", shortened(t.text)), didYouMean(t.text, c.design.partNames(), c.design.partList()))
	return false
}

// expression reads an X: parts joined by + and |, of which | binds tighter, and brackets.
func (c *cursor) expression() (*Expr, bool) {
	start := c.peek()
	parts := 0
	x, ok := c.sum(0, func(t token) bool { parts++; return c.usePart(t) })
	if ok && parts > MaxExpression {
		c.failAt(start, fmt.Sprintf("the step has more than %d parts", MaxExpression), "write it in several steps")
		return nil, false
	}
	return x, ok
}

// sum reads operands joined by + and |. use checks that a token names what may be one.
func (c *cursor) sum(depth int, use func(token) bool) (*Expr, bool) {
	return c.joined("+", InSeries, func() (*Expr, bool) {
		return c.joined("|", InParallel, func() (*Expr, bool) { return c.primary(depth, use) })
	})
}

// joined reads operands with one sign between them.
func (c *cursor) joined(sign string, op ExprOp, operand func() (*Expr, bool)) (*Expr, bool) {
	pos := c.place(c.peek())
	x, ok := operand()
	if !ok || c.peek().text != sign {
		return x, ok
	}
	args := []*Expr{x}
	for c.accept(sign) {
		if x, ok = operand(); !ok {
			return nil, false
		}
		args = append(args, x)
	}
	return &Expr{Op: op, Args: args, Pos: pos}, true
}

// primary reads a name or brackets.
func (c *cursor) primary(depth int, use func(token) bool) (*Expr, bool) {
	t := c.peek()
	if t.text != "(" {
		c.take()
		return &Expr{Op: Leaf, Part: t.text, Pos: c.place(t)}, use(t)
	}
	if depth >= MaxNesting {
		c.failAt(t, fmt.Sprintf("brackets are nested more than %d deep", MaxNesting), "take some of them out")
		return nil, false
	}
	c.take()
	x, ok := c.sum(depth+1, use)
	if !ok {
		return nil, false
	}
	if end := c.peek(); !c.accept(")") {
		c.failAt(end, fmt.Sprintf("a bracket is not closed before %s", found(end)), "write )")
		return nil, false
	}
	return x, true
}

// leaves calls visit for each part of an expression.
func (x *Expr) leaves(visit func(*Expr)) {
	if x == nil {
		return
	}
	if x.Op == Leaf {
		visit(x)
	}
	for _, arg := range x.Args {
		arg.leaves(visit)
	}
}
