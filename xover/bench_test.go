package xover

import (
	"fmt"
	"strings"
	"testing"
)

// BenchmarkParse reads a usual file, and one with as many parts as there may be.
func BenchmarkParse(b *testing.B) {
	var large strings.Builder
	large.WriteString("[parts]\n")
	for i := range MaxParts {
		fmt.Fprintf(&large, "C%d = { value = \"4.7 uF\", esr = \"20 mohm\" }\n", i)
	}
	large.WriteString("[driver.d]\nimpedance = \"8 ohm\"\n[[way]]\nname = \"w\"\ndriver = \"d\"\nnetwork = [")
	for i := range MaxParts / 4 {
		fmt.Fprintf(&large, "\"series C%d\", \"shunt C%d + C%d | C%d\",\n", 4*i, 4*i+1, 4*i+2, 4*i+3)
	}
	large.WriteString("]\n")
	for _, test := range []struct {
		name string
		src  []byte
	}{
		{"parts=6", readFile(b, "testdata/good/harbour.toml")},
		{fmt.Sprintf("parts=%d", MaxParts), []byte(large.String())},
	} {
		b.Run(test.name, func(b *testing.B) {
			b.ReportAllocs()
			b.SetBytes(int64(len(test.src)))
			for b.Loop() {
				if _, _, err := Parse("f", test.src); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
