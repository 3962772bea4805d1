package cli

import (
	"strings"

	"sixdown/xover/quantity"
)

// A quantityFlag is a flag's value with a unit.
type quantityFlag struct {
	unit  quantity.Unit
	value *float64 // SI
	given bool
}

// Set implements pflag.Value.
func (q *quantityFlag) Set(text string) error {
	v, err := quantity.ParseAs(strings.TrimSpace(text), q.unit)
	if err != nil {
		return err
	}
	*q.value, q.given = v, true
	return nil
}

// String implements pflag.Value. It is what help gives as the default: nothing for zero.
func (q *quantityFlag) String() string {
	if q.value == nil || *q.value == 0 {
		return ""
	}
	return quantity.Format(*q.value, q.unit)
}

// Type implements pflag.Value.
func (q *quantityFlag) Type() string { return q.unit.String() }

func (q *quantityFlag) example() string { return `"` + q.unit.Example() + `"` }

// A quantityList is a flag's value of several quantities with commas between them. Each time the flag is
// given, they are added.
type quantityList struct {
	unit   quantity.Unit
	values *[]float64 // SI
}

// Set implements pflag.Value.
func (q *quantityList) Set(text string) error {
	for item := range strings.SplitSeq(text, ",") {
		v, err := quantity.ParseAs(strings.TrimSpace(item), q.unit)
		if err != nil {
			return err
		}
		*q.values = append(*q.values, v)
	}
	return nil
}

// String implements pflag.Value. It is what help gives as the default: these lists have none.
func (q *quantityList) String() string { return "" }

// Type implements pflag.Value.
func (q *quantityList) Type() string { return q.unit.String() + " list" }

func (q *quantityList) example() string { return `"` + q.unit.Example() + `"` }
