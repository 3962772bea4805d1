package driver

// A chain is cells in series between the terminals: the form of every fitted circuit.
type chain []cell

// A cell is a resistor, an inductor and a capacitor in parallel, and beside them, if lb is not 0, the box's
// branch: an inductor, a capacitor and a resistor in series. What else is 0 is not there.
type cell struct {
	name       string  // put after R, L and C; "": the motional branch, which has its own symbols
	r, l, c    float64 // Ω, H, F
	lb, cb, rb float64 // H, F, Ω
}

// impedance returns Z(s).
func (c *cell) impedance(s complex128) complex128 {
	if c.l == 0 {
		return complex(c.r, 0)
	}
	// sL/(1 + sL·Y), Y being the rest, so that s = 0 needs no special case.
	y := s * complex(c.c, 0)
	if c.r > 0 {
		y += complex(1/c.r, 0)
	}
	if c.lb > 0 {
		sc := s * complex(c.cb, 0)
		y += sc / (1 + sc*(complex(c.rb, 0)+s*complex(c.lb, 0)))
	}
	x := s * complex(c.l, 0)
	return x / (1 + x*y)
}

// Impedance returns the sum of the cells'.
func (ch chain) Impedance(s complex128) complex128 {
	var z complex128
	for i := range ch {
		z += ch[i].impedance(s)
	}
	return z
}

// elements returns the cells' parts. The nodes between cells come first, then those within the box's branch.
func (ch chain) elements() []Element {
	var es []Element
	add := func(name string, kind ElementKind, from, to int, value float64) {
		if value > 0 {
			es = append(es, Element{Name: name, Kind: kind, From: from, To: to, Value: value})
		}
	}
	from, inner := Plus, len(ch)+1
	for i := range ch {
		c := &ch[i]
		to := i + 2
		if i == len(ch)-1 {
			to = Minus
		}
		r, l, k := "R"+c.name, "L"+c.name, "C"+c.name
		if c.name == "" {
			r, l, k = "Res", "Lces", "Cmes" // Small's symbols
		}
		add(r, Resistor, from, to, c.r)
		add(l, Inductor, from, to, c.l)
		add(k, Capacitor, from, to, c.c)
		if c.lb > 0 {
			add("Lceb", Inductor, from, inner, c.lb)
			add("Cmep", Capacitor, inner, inner+1, c.cb)
			add("Rel", Resistor, inner+1, to, c.rb)
			inner += 2
		}
		from = to
	}
	return es
}
