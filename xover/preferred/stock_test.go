package preferred

import (
	"math"
	"reflect"
	"strings"
	"testing"
)

func TestReadStock(t *testing.T) {
	none := Item{Tol: -1, DCR: -1, Price: -1, Count: -1}
	item := func(change func(*Item)) Item {
		it := none
		change(&it)
		return it
	}
	want := []Item{
		item(func(i *Item) { i.Kind, i.Value, i.Tol, i.Count = Resistor, 4.7, 0.01, 3 }),
		item(func(i *Item) { i.Kind, i.Value, i.DCR, i.Price, i.Name = Inductor, 0.33e-3, 0.35, 4.5, "LA, small" }),
		item(func(i *Item) { i.Kind, i.Value, i.Tol = Capacitor, 6.8e-6, 0.05 }),
	}
	for name, text := range map[string]string{
		"comma":      "# a shelf\nKind,value,tolerance,resistance,price,quantity,name\nL,0.33 mH,,0.35 ohm,4.50,,\"LA, small\"\nR,4R7,1 %,,,3,\n\nC,6u8,5,,,,\n",
		"semicolon":  "\ufeffvalue;kind;dcr;price;name;tol;count\r\n0,33 mH;L;0,35;4,5;LA, small;;\r\n4,7 ohm;R;;;;1;3\r\n6,8 uF;c;;;;5 %;\r\n",
		"tab":        "value\tname\tdcr\tprice\ttol\tcount\n0.33mH\tLA, small\t0.35\t4.5\n4.7 ohm\t\t\t\t1 %\t3\n6.8uF\t\t\t\t5 %\n2 uF\t\t\t\t\t0\n",
		"toml":       "# shelf\n[[item]]\nvalue = \"0.33 mH\"\ndcr = \"0.35 ohm\"\nprice = 4.5\nname = \"LA, small\"\n[[item]]\nkind = \"R\"\nvalue = \"4R7\"\ntol = \"1 %\"\ncount = 3\n[[item]]\nvalue = \"6.8 uF\"\ntol = 5\n",
		"toml-short": "item = [{ value = \"0.33 mH\", dcr = 0.35, price = 4.5, name = \"LA, small\" }, { value = \"4.7 ohm\", tol = 1, count = 3 }, { value = \"6.8 uF\", tol = \"5 %\" }]\n",
	} {
		t.Run(name, func(t *testing.T) {
			s, err := ReadStock(name, strings.NewReader(text))
			if err != nil {
				t.Fatal(err)
			}
			got := s.Items()
			for i := range got { // decimals read by two roads
				if i < len(want) && math.Abs(got[i].Value/want[i].Value-1) < 1e-15 {
					got[i].Value = want[i].Value
				}
			}
			if !reflect.DeepEqual(got, want) {
				t.Errorf("got %+v\nwant %+v", got, want)
			}
		})
	}
}

func TestBadStock(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"", "s: the list has no items; give a line of names"},
		{"value\n", "s: the list has no items;"},
		{"kind,tol\nR,5\n", "s:1: no column is named value;"},
		{"value,colour\n", `s:1: "colour" is no name of a column, or is there twice;`},
		{"value,value\n", `s:1: "value" is no name of a column, or is there twice;`},
		{"value\n\n1 mH\n2 V\n", `s:4: "2 V" is no value of a part of kind "";`},
		{"kind,value\nC,1 mH\n", `s:2: "1 mH" is no value of a part of kind "C";`},
		{"value\n0 ohm\n", `s:2: "0 ohm" is no value of a part`},
		{"value,dcr\n1 mH,-1\n", `s:2: dcr is "-1"; write a number from 0 up`},
		{"value,price\n1 mH,NaN\n", `s:2: price is "NaN";`},
		{"value,count\n1 mH,1.5\n", `s:2: count is "1.5"; write how many`},
		{"value\n1 mH,2\n", "s:2: there are 2 values and 1 names;"},
		{"value\n\"1 mH\n", "s:2: this is no line of values:"},
		{"[[item]]\nvalue = 3\n", `s: value: `},
		{"[[item]]\nvalue = \"1 mH\"\ncolour = \"red\"\n", `s: item 1: there is no key "colour"; the keys are kind, value,`},
		{"[[item]]\nvalue = \"1 mH\n", "s:2: this is no list of [[item]] tables:"},
		{"[[items]]\nvalue = \"1 mH\"\n", "this is no list of [[item]] tables:"},
		{strings.Repeat("#", MaxStockBytes+1), "s: the list is larger than 1048576 bytes;"},
		{"value\n" + strings.Repeat("1 mH\n", MaxStockItems+1), "s:20002: there are more than 20000 items;"},
	} {
		s, err := ReadStock("s", strings.NewReader(c.text))
		if s != nil || err == nil || !strings.HasPrefix(err.Error(), c.want) && !strings.Contains(err.Error(), c.want) {
			t.Errorf("%.40q: %v, %v; want %s", c.text, s, err, c.want)
		}
	}
	// All faults at once, up to ten.
	_, err := ReadStock("s", strings.NewReader("value\n"+strings.Repeat("fish\n", 20)))
	if n := strings.Count(err.Error(), "\n") + 1; n != maxErrors {
		t.Errorf("%d faults are told, want %d", n, maxErrors)
	}
}

// What two parts make: by Ohm's law and Kirchhoff's.
func TestPairs(t *testing.T) {
	items := []Item{
		{Kind: Capacitor, Value: 1e-6, Price: 1, DCR: -1, Count: 1},
		{Kind: Capacitor, Value: 3e-6, Price: 2, DCR: -1, Count: -1},
	}
	var got [][2]float64
	for _, p := range Pairs(items, 0, 1) {
		got = append(got, [2]float64{p.Value, p.Price})
		if p.Parallel != (p.Value > 2e-6) {
			t.Errorf("%g F: in parallel %t", p.Value, p.Parallel)
		}
	}
	// 1 and 3 in series ¾, 3 and 3 in series 1.5, 1 and 3 side by side 4, 3 and 3 side by side 6; there is only one of 1.
	want := [][2]float64{{0.75e-6, 3}, {1.5e-6, 4}, {4e-6, 3}, {6e-6, 4}}
	if len(got) != len(want) {
		t.Fatalf("got %v, want %v", got, want)
	}
	for i := range want {
		if math.Abs(got[i][0]/want[i][0]-1) > 1e-15 || got[i][1] != want[i][1] {
			t.Errorf("got %v, want %v", got[i], want[i])
		}
	}
	coils := []Item{{Kind: Inductor, Value: 1e-3, DCR: 0.4, Price: -1, Count: -1}, {Kind: Inductor, Value: 3e-3, DCR: 1.2, Price: -1, Count: -1}}
	for _, p := range Pairs(coils, 0, 1) {
		// Coils with the same R/L: the pair has it too.
		if math.Abs(p.DCR/p.Value/400-1) > 1e-14 || p.Price >= 0 {
			t.Errorf("%+v: R/L is %g, want 400", p, p.DCR/p.Value)
		}
	}
}

func FuzzReadStock(f *testing.F) {
	for _, s := range []string{
		"value\n1 mH\n", "kind,value,tol,dcr,price,count,name\nL,0.33 mH,5 %,0.3,1.5,2,x\n", "value;price\n1,5 mH;2,5\n", "value\tname\n4u7\tx\n",
		"[[item]]\nvalue = \"1 mH\"\n", "item = [{ value = \"1 mH\" }]\n", "# nothing\n", "value\n\"1\nmH\"\n", "\ufeffvalue\n1 ohm", "item = 3\n", "[[item]]\nvalue = [1]\n",
	} {
		f.Add([]byte(s))
	}
	f.Fuzz(func(t *testing.T, src []byte) {
		s, err := ReadStock("s", strings.NewReader(string(src)))
		if (s == nil) != (err != nil) {
			t.Fatalf("%v and %v", s, err)
		}
		if s == nil {
			return
		}
		for _, it := range s.Items() {
			if !(it.Value > 0) || math.IsInf(it.Value, 1) || math.IsNaN(it.Tol+it.DCR+it.Price) || it.Count == 0 {
				t.Fatalf("%+v", it)
			}
		}
	})
}
