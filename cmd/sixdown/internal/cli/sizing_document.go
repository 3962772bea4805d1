package cli

import (
	"encoding/json"
	"fmt"
	"math"

	"sixdown/xover/ladder"
)

// The JSON document of size: a wayPartsDocument under each way's name, then what adds up.
type sizeDocument struct {
	Low      wayPartsDocument  `json:"low"`
	Mid      *wayPartsDocument `json:"mid,omitempty"`
	High     wayPartsDocument  `json:"high"`
	Series   string            `json:"series"`
	Sum      sumShapeDocument  `json:"sum"`
	Rounded  sumShapeDocument  `json:"rounded_sum"`
	MidPadDB *number           `json:"mid_excess_db,omitempty"`
}

type (
	wayPartsDocument struct {
		Network     []string         `json:"network"`
		Parts       partValues       `json:"parts"` // Ω, H or F
		LoadOhm     number           `json:"load_ohm"`
		CrossingHz  []number         `json:"crossover_hz"`
		CrossingDB  []number         `json:"crossover_db"`
		Polarity    string           `json:"polarity"`
		Preferred   []choiceDocument `json:"preferred"`
		RoundedWith effectDocument   `json:"rounded"`
	}
	choiceDocument struct {
		Part    string         `json:"part"`
		Nearest number         `json:"nearest"` // Ω, H or F, as are all values
		Below   optionDocument `json:"below"`
		Above   optionDocument `json:"above"`
	}
	optionDocument struct {
		Value number `json:"value"`
		effectDocument
	}
	effectDocument struct {
		CrossingDB number `json:"crossover_db"`
		WorstDB    number `json:"worst_db"`
		WorstHz    number `json:"worst_hz"`
	}
	sumShapeDocument struct {
		LowestDB  number `json:"lowest_db"`
		HighestDB number `json:"highest_db"`
	}
)

// partValues is a JSON object of part names and values, in the order of the parts.
type partValues []ladder.NamedPart

// MarshalJSON implements json.Marshaler.
func (p partValues) MarshalJSON() ([]byte, error) {
	b := []byte{'{'}
	for i, part := range p {
		if i > 0 {
			b = append(b, ',')
		}
		value, err := json.Marshal(number(part.Value))
		if err != nil {
			return nil, err
		}
		b = fmt.Appendf(b, "%q:%s", part.Name, value)
	}
	return append(b, '}'), nil
}

// document returns the answer as JSON has it.
func (s *sizing) document() sizeDocument {
	doc := sizeDocument{
		Low: s.wayDocument(0), High: s.wayDocument(len(s.ways) - 1),
		Series:  s.series.String(),
		Sum:     sumShapeDocument{number(s.sum.LowestDB), number(s.sum.HighestDB)},
		Rounded: sumShapeDocument{number(s.roundSum.LowestDB), number(s.roundSum.HighestDB)},
	}
	if len(s.ways) == 3 {
		mid := s.wayDocument(1)
		doc.Mid = &mid
	}
	if s.midReversed != nil {
		excess := number(s.midExcessDB)
		doc.MidPadDB = &excess
	}
	return doc
}

func (s *sizing) wayDocument(i int) wayPartsDocument {
	w := s.sections[i]
	doc := wayPartsDocument{
		Network: w.steps, Parts: w.parts, LoadOhm: number(w.load),
		CrossingHz: numbers(w.crossings), CrossingDB: numbers(s.ways[i].levelDB),
		Polarity:    polarity(s.sum.Reversed[i]),
		RoundedWith: s.ways[i].together.document(),
	}
	for _, ch := range s.ways[i].choices {
		doc.Preferred = append(doc.Preferred, choiceDocument{
			ch.part.Name, number(ch.nearest),
			optionDocument{number(ch.below.value), ch.below.document()},
			optionDocument{number(ch.above.value), ch.above.document()},
		})
	}
	return doc
}

func polarity(reversed bool) string {
	if reversed {
		return "reversed"
	}
	return "normal"
}

func (e effect) document() effectDocument {
	d := effectDocument{number(e.CrossingDB), number(e.WorstDB), number(e.WorstHz)}
	if e.WorstHz == 0 { // nothing changes anywhere
		d.WorstHz = number(math.NaN())
	}
	return d
}

// records returns the answer as CSV has it, a record for each part. Values are in Ω, H or F.
func (s *sizing) records() [][]string {
	records := [][]string{{"way", "part", "unit", "value",
		"below", "below_crossover_db", "below_worst_db", "below_worst_hz",
		"above", "above_crossover_db", "above_worst_db", "above_worst_hz", "nearest"}}
	for i, w := range s.sections {
		for _, ch := range s.ways[i].choices {
			record := []string{w.name, ch.part.Name, partUnit(ch.part.Kind).String(), number(ch.part.Value).csv()}
			for _, o := range []option{ch.below, ch.above} {
				e := o.document()
				record = append(record, number(o.value).csv(), e.CrossingDB.csv(), e.WorstDB.csv(), e.WorstHz.csv())
			}
			records = append(records, append(record, number(ch.nearest).csv()))
		}
	}
	return records
}
