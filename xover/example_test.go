package xover_test

import (
	"fmt"

	"sixdown/xover"
)

const small = `
[parts]
C1 = "6.8 uF"   # polypropylene

[driver.tweeter]
impedance = "8 ohm"

[[way]]
name    = "high"
driver  = "tweeter"
network = ["series C1"]
`

func ExampleParse() {
	d, _, err := xover.Parse("small.toml", []byte(small))
	if err != nil {
		fmt.Println(err)
		return
	}
	way := d.Way("high")
	fmt.Println(way.Driver, way.Network[0], d.Part("C1").Value)
	// Output: tweeter series C1 6.8e-06
}

func ExampleParse_errors() {
	_, _, err := xover.Parse("small.toml", []byte(`
[drive]
levle = "2.83 V"

[[way]]
name = "high"
driver = "tweeter"
network = ["series C1"]
`))
	fmt.Println(err)
	// Output:
	// small.toml:3:1: [drive] has no key "levle"; did you mean "level"? its keys are level, source, rated_power, rated_load
	// small.toml:7:11: way "high" has the driver "tweeter", which is not defined; add a table [driver.tweeter]
	// small.toml:8:20: "C1" is used and not defined; [parts] defines none
}

func ExampleEdit() {
	out, err := xover.Edit([]byte(small), map[string]float64{"C1": 5.6e-6})
	fmt.Println(string(out[:40]), err)
	// Output:
	// [parts]
	// C1 = "5.6 uF"   # polypropylene <nil>
}
