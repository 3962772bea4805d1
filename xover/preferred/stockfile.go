package preferred

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"unicode"

	"github.com/pelletier/go-toml/v2"

	"sixdown/xover/quantity"
)

// What a stock list may hold at most.
const (
	MaxStockBytes = 1 << 20
	MaxStockItems = 20000
	maxErrors     = 10
)

// ReadStock reads a list of parts; name is what messages call it, such as "shelf.csv".
//
// A list is comma-separated values (or with semicolons or tabs between) under a line of names: value and, in any order and if
// wanted, kind (R, L or C), tol, dcr, price, count, name. Or it is TOML, an [[item]] table each with these keys. Values are
// written with their units, "0.33 mH", or as codes of IEC 60062 where the kind is given; a tolerance as "5 %", a
// resistance as "0.35 ohm" or as a number of ohms. What is left empty is not stated. Lines that begin with # are comments.
//
// The error names every line that is wrong, up to ten, and how to mend it; the stock is then nil. r is read to its end, but no
// more than MaxStockBytes.
func ReadStock(name string, r io.Reader) (*Stock, error) {
	src, err := io.ReadAll(io.LimitReader(r, MaxStockBytes+1))
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	if len(src) > MaxStockBytes {
		return nil, fmt.Errorf("%s: the list is larger than %d bytes; check that this is one", name, MaxStockBytes)
	}
	src = bytes.TrimPrefix(src, []byte("\ufeff"))
	f := &stockFile{name: name}
	if isTOML(src) {
		f.readTOML(src)
	} else {
		f.readCSV(src)
	}
	if len(f.errs) == 0 && len(f.items) == 0 {
		f.fail(0, "the list has no items", "give a line of names with value among them, and a line for each item")
	}
	if len(f.errs) > 0 {
		return nil, errors.Join(f.errs...)
	}
	return NewStock(f.items), nil
}

// A stockFile is a list being read.
type stockFile struct {
	name  string
	items []Item
	errs  []error
}

// fail notes what is wrong in a line; 0: in the whole.
func (f *stockFile) fail(line int, what, mend string) {
	where := f.name
	if line > 0 {
		where += ":" + strconv.Itoa(line)
	}
	if len(f.errs) < maxErrors {
		f.errs = append(f.errs, fmt.Errorf("%s: %s; %s", where, what, mend))
	}
}

// isTOML reports whether the first line that says anything is TOML's.
func isTOML(src []byte) bool {
	for line := range bytes.Lines(src) {
		line = bytes.TrimSpace(line)
		if len(line) == 0 || line[0] == '#' {
			continue
		}
		return line[0] == '[' || bytes.HasPrefix(line, []byte("item"))
	}
	return false
}

// columns are the names that a list may use.
func columns() []string { return []string{"kind", "value", "tol", "dcr", "price", "count", "name"} }

// columnOf returns which column a name means; "" if it is none. What a shop's list may say for it will do too.
func columnOf(name string) string {
	name = strings.ToLower(strings.TrimSpace(name))
	switch name {
	case "tolerance":
		return "tol"
	case "resistance":
		return "dcr"
	case "quantity", "stock":
		return "count"
	}
	if slices.Contains(columns(), name) {
		return name
	}
	return ""
}

// readCSV reads comma-separated values.
func (f *stockFile) readCSV(src []byte) {
	r := csv.NewReader(bytes.NewReader(src))
	r.Comment = '#'
	r.Comma = comma(src)
	r.FieldsPerRecord = -1
	r.TrimLeadingSpace = r.Comma != '\t'
	var names []string
	for {
		record, err := r.Read()
		if errors.Is(err, io.EOF) {
			return
		}
		if err != nil {
			line := 0
			if p, ok := errors.AsType[*csv.ParseError](err); ok {
				line, err = p.Line, p.Err
			}
			f.fail(line, "this is no line of values: "+err.Error(), "write values with a comma between, texts with commas in double quotes")
			return
		}
		line, _ := r.FieldPos(0)
		if names == nil {
			if names = f.header(line, record); names == nil {
				return
			}
			continue
		}
		if len(record) > len(names) {
			f.fail(line, fmt.Sprintf("there are %d values and %d names", len(record), len(names)), "write one for each name, and none with a comma in it unless it is in double quotes")
			continue
		}
		fields := map[string]string{}
		for i, text := range record {
			fields[names[i]] = strings.TrimSpace(text)
		}
		if r.Comma == ';' {
			decimalPoints(fields)
		}
		f.item(line, fields)
	}
}

// comma returns what separates the values of a list: of semicolon, tab and comma the first that is in the line of names.
func comma(src []byte) rune {
	for line := range bytes.Lines(src) {
		if t := bytes.TrimSpace(line); len(t) == 0 || t[0] == '#' {
			continue
		}
		for _, c := range ";\t" {
			if bytes.ContainsRune(line, c) {
				return c
			}
		}
		break
	}
	return ','
}

// decimalPoints makes points of the decimal commas of all but the name.
func decimalPoints(fields map[string]string) {
	for key, text := range fields {
		if key != "name" {
			fields[key] = strings.ReplaceAll(text, ",", ".")
		}
	}
}

// header reads the line of names; nil if it is wrong.
func (f *stockFile) header(line int, record []string) []string {
	names := make([]string, len(record))
	seen := map[string]bool{}
	for i, text := range record {
		if names[i] = columnOf(text); names[i] == "" || seen[names[i]] {
			f.fail(line, fmt.Sprintf("%.40q is no name of a column, or is there twice", text), "name the columns "+strings.Join(columns(), ", ")+"; only value must be there")
			return nil
		}
		seen[names[i]] = true
	}
	if !seen["value"] {
		f.fail(line, "no column is named value", "give a first line of names such as kind,value,tol,dcr,price,count,name")
		return nil
	}
	return names
}

// readTOML reads [[item]] tables.
func (f *stockFile) readTOML(src []byte) {
	var list struct {
		Item []map[string]any `toml:"item"`
	}
	d := toml.NewDecoder(bytes.NewReader(src))
	d.DisallowUnknownFields()
	if err := d.Decode(&list); err != nil {
		line := 0
		if e, ok := errors.AsType[*toml.DecodeError](err); ok {
			line, _ = e.Position()
		}
		f.fail(line, "this is no list of [[item]] tables: "+err.Error(), `write a table for each, [[item]], with value = "0.33 mH" and so on`)
		return
	}
	for i, it := range list.Item {
		fields := map[string]string{}
		before := len(f.errs)
		for key, v := range it {
			column := columnOf(key)
			if column == "" {
				f.fail(0, fmt.Sprintf("item %d: there is no key %.40q", i+1, key), "the keys are "+strings.Join(columns(), ", "))
			}
			fields[column] = fmt.Sprint(v)
		}
		if len(f.errs) == before {
			f.item(0, fields)
		}
	}
}

// item reads one item.
func (f *stockFile) item(line int, fields map[string]string) {
	if len(f.items) >= MaxStockItems {
		if len(f.items) == MaxStockItems {
			f.fail(line, fmt.Sprintf("there are more than %d items", MaxStockItems), "leave out what no network needs")
		}
		return
	}
	it := Item{Tol: -1, DCR: -1, Price: -1, Count: -1, Name: fields["name"]}
	letter := strings.ToUpper(fields["kind"])
	v, unit, err := quantity.ParsePart(letter, fields["value"])
	if err != nil {
		f.fail(line, "value: "+firstSentence(err), `write it with its unit, such as "0.33 mH"`)
		return
	}
	var of string
	switch unit {
	case quantity.Ohm:
		it.Kind, of = Resistor, "R"
	case quantity.Henry:
		it.Kind, of = Inductor, "L"
	case quantity.Farad:
		it.Kind, of = Capacitor, "C"
	}
	if of == "" || letter != "" && letter != of || !(v > 0) || math.IsInf(v, 1) {
		f.fail(line, fmt.Sprintf("%q is no value of a part of kind %q", fields["value"], fields["kind"]), "R is in ohm, L in H, C in F, and above 0")
		return
	}
	it.Value = v
	if strings.ContainsFunc(it.Name, unicode.IsControl) {
		f.fail(line, fmt.Sprintf("the name %q has a control character", it.Name), "write it in plain letters")
		return
	}
	ok := f.number(line, "tol", fields["tol"], quantity.Percent, &it.Tol) &&
		f.number(line, "dcr", fields["dcr"], quantity.Ohm, &it.DCR) &&
		f.number(line, "price", fields["price"], quantity.None, &it.Price)
	if text := fields["count"]; ok && text != "" {
		n, err := strconv.Atoi(text)
		if err != nil || n < 0 {
			f.fail(line, fmt.Sprintf("count is %.40q", text), "write how many there are, or leave it empty for as many as are wanted")
			return
		}
		if it.Count = n; n == 0 {
			return // there is none
		}
	}
	if ok {
		f.items = append(f.items, it)
	}
}

// number reads a number that is stated, with its unit if it has one; it reports whether there is nothing wrong.
func (f *stockFile) number(line int, key, text string, unit quantity.Unit, dst *float64) bool {
	if text == "" {
		return true
	}
	v, err := strconv.ParseFloat(text, 64)
	switch {
	case err == nil && unit == quantity.Percent:
		v /= 100
	case err != nil && unit != quantity.None:
		v, err = quantity.ParseAs(text, unit)
	}
	if err != nil || !(v >= 0) || math.IsInf(v, 1) {
		f.fail(line, fmt.Sprintf("%s is %.40q", key, text), "write a number from 0 up, or leave it empty")
		return false
	}
	if most := map[quantity.Unit]float64{quantity.Percent: 1, quantity.Ohm: mostDCR}[unit]; most > 0 && v > most {
		f.fail(line, fmt.Sprintf("%s is %.40q", key, text), "give "+quantity.Format(most, unit)+" at most")
		return false
	}
	*dst = v
	return true
}

// mostDCR is in Ω more than any winding has that is used.
const mostDCR = 10e3

// firstSentence is what an error says without how to mend it.
func firstSentence(err error) string {
	what, _, _ := strings.Cut(err.Error(), "; ")
	return what
}
