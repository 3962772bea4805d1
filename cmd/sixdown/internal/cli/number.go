package cli

import (
	"encoding/json"
	"math"
	"strconv"
)

// A number is a float64 that JSON and CSV can hold: what does not exist, an infinity or NaN, is null in the
// one and an empty field in the other. It keeps every digit.
type number float64

func (n number) exists() bool { return !math.IsNaN(float64(n)) && !math.IsInf(float64(n), 0) }

// MarshalJSON implements json.Marshaler.
func (n number) MarshalJSON() ([]byte, error) {
	if !n.exists() {
		return []byte("null"), nil
	}
	return json.Marshal(float64(n) + 0) // + 0 makes a zero of -0
}

// csv returns the number as a CSV field.
func (n number) csv() string {
	if !n.exists() {
		return ""
	}
	return strconv.FormatFloat(float64(n)+0, 'g', -1, 64)
}

// numbers makes a column of numbers of values; nil, which JSON gives as null, of nil.
func numbers(values []float64) []number {
	if values == nil {
		return nil
	}
	ns := make([]number, len(values))
	for i, v := range values {
		ns[i] = number(v)
	}
	return ns
}

// csvRecords sets columns of the same length under their names.
func csvRecords(names []string, columns [][]number) [][]string {
	records := [][]string{names}
	for k := range columns[0] {
		record := make([]string, len(columns))
		for i := range columns {
			record[i] = columns[i][k].csv()
		}
		records = append(records, record)
	}
	return records
}
