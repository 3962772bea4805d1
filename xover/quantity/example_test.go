package quantity_test

import (
	"fmt"

	"sixdown/xover/quantity"
)

func ExampleParseAs() {
	v, err := quantity.ParseAs("0.33 mH", quantity.Henry)
	fmt.Println(v, err)
	_, err = quantity.ParseAs("2200", quantity.Hertz)
	fmt.Println(err)
	// Output:
	// 0.00033 <nil>
	// "2200" has no unit; write a frequency such as "2.2 kHz"
}

func ExampleParsePart() {
	v, unit, err := quantity.ParsePart("C3", "4u7")
	fmt.Println(v, unit, err)
	_, _, err = quantity.ParsePart("R1", "4K7J")
	fmt.Println(err)
	// Output:
	// 4.7e-06 farad <nil>
	// "4K7J" ends in the tolerance letter J, 5 %; write value = "4K7" and tol = "5 %"
}

func ExampleFormat() {
	fmt.Println(quantity.Format(0.00033, quantity.Henry))
	fmt.Println(quantity.Round(0.00033, quantity.Henry, 3))
	// Output:
	// 0.33 mH
	// 0.330 mH
}
