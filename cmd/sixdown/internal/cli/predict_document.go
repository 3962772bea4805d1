package cli

import (
	"math"

	"sixdown/sim"
	"sixdown/sim/field"
)

// The JSON document of predict. Keys say units; lists are as long as frequency_hz, or null.
type (
	predictDocument struct {
		Title       string           `json:"title"`
		Angle       *angleDocument   `json:"angle,omitempty"` // of the ear, where it is turned
		FrequencyHz []number         `json:"frequency_hz"`
		Ways        []wayDocument    `json:"ways"`
		Sum         sumDocument      `json:"sum"`
		Input       inputDocument    `json:"input"`
		Drivers     []driverDocument `json:"drivers"`       // those with impedance tables
		Flights     []flightDocument `json:"flights"`       // of drivers with a measured phase
		OneTimeBase bool             `json:"one_time_base"` // false: phases between drivers, and the sum, mean nothing
		Summary     summaryDocument  `json:"summary"`
		Warnings    []string         `json:"warnings"`
	}
	wayDocument struct {
		Name        string   `json:"name"`
		Driver      *string  `json:"driver"` // null in a tone network
		GainDB      []number `json:"gain_db"`
		PhaseDeg    []number `json:"phase_deg"`
		SPLDB       []number `json:"spl_db"`
		SPLPhaseDeg []number `json:"spl_phase_deg"`
	}
	sumDocument struct {
		SPLDB        []number `json:"spl_db"`
		SPLPhaseDeg  []number `json:"spl_phase_deg"`
		GroupDelayMS []number `json:"group_delay_ms"`
	}
	inputDocument struct {
		ImpedanceOhm []number `json:"impedance_ohm"`
		PhaseDeg     []number `json:"phase_deg"`
		EPDROhm      []number `json:"epdr_ohm"`
	}
	summaryDocument struct {
		BandHz       []number             `json:"band_hz"`
		MinImpedance lowestDocument       `json:"min_impedance"`
		MinEPDR      lowestDocument       `json:"min_epdr"`
		Crossings    []crossingDocument   `json:"crossings"`
		Alignment    []alignmentDocument  `json:"alignment"` // of the crossings; null without a sum
		Sum          *sumSummaryDocument  `json:"sum"`
		Tone         *toneSummaryDocument `json:"tone"`
		Noise        *noiseDocument       `json:"noise,omitempty"` // thermal, of a tone network
	}
	noiseDocument struct {
		Kelvin        number   `json:"kelvin"`
		FlatV         number   `json:"flat_v"`       // rms at the output, 20 Hz to 20 kHz
		AWeightedV    number   `json:"a_weighted_v"` // rms
		FrequencyHz   []number `json:"frequency_hz"`
		DensityV2PerH []number `json:"density_v2_per_hz"`
	}
	lowestDocument struct {
		Ohm number `json:"ohm"`
		Hz  number `json:"hz"`
	}
	crossingDocument struct {
		Low         string `json:"low"`
		High        string `json:"high"`
		FrequencyHz number `json:"frequency_hz"`
		LevelDB     number `json:"level_db"`
		PhaseDeg    number `json:"phase_deg"`
	}
	sumSummaryDocument struct {
		BandHz    []number `json:"band_hz"`
		MeanSPLDB number   `json:"mean_spl_db"`
		RippleDB  number   `json:"ripple_db"`
		RMSDB     number   `json:"rms_db"`
		Low3DBHz  *number  `json:"low_3db_hz"`  // null: not within summary.band_hz
		High3DBHz *number  `json:"high_3db_hz"` // null: not within summary.band_hz
		DipDB     *number  `json:"dip_db"`      // below the mean, null: none of more than 3 dB between the two
		DipHz     *number  `json:"dip_hz"`
	}
	toneSummaryDocument struct {
		FrequencyHz     []number `json:"frequency_hz"`
		GainDB          []number `json:"gain_db"`
		InsertionLossDB []number `json:"insertion_loss_db"`
	}
)

// document returns the answer as JSON has it.
func (p *prediction) document() predictDocument {
	doc := predictDocument{
		Title:       p.Title,
		FrequencyHz: numbers(p.Freqs),
		Input: inputDocument{
			ImpedanceOhm: numbers(sim.Magnitudes(p.Zin)),
			PhaseDeg:     phases(p.Zin),
			EPDROhm:      numbers(sim.EPDRs(p.Zin)),
		},
		Drivers: driverDocuments(p.system.Fits()),
		Flights: flightDocuments(p.system), OneTimeBase: p.system.OneTimeBase(),
		Summary:  summarize(p.summary, p.alignment),
		Warnings: append([]string{}, p.warnings...), // [] and not null where there are none
	}
	if n := p.noise; n != nil {
		doc.Summary.Noise = &noiseDocument{number(n.Kelvin), number(n.Flat), number(n.AWeighted), numbers(n.Freqs), numbers(n.Density)}
	}
	if p.Angle != (field.Angle{}) {
		doc.Angle = &angleDocument{number(p.Angle.HorizontalDeg), number(p.Angle.VerticalDeg)}
	}
	for _, w := range p.Ways {
		way := wayDocument{Name: w.Name, GainDB: numbers(sim.DBs(w.H)), PhaseDeg: phases(w.H)}
		if w.Driver != "" {
			way.Driver = &w.Driver
		}
		if w.P != nil {
			way.SPLDB, way.SPLPhaseDeg = numbers(sim.SPLs(w.P)), phases(w.P)
		}
		doc.Ways = append(doc.Ways, way)
	}
	if p.Sum != nil {
		doc.Sum = sumDocument{SPLDB: numbers(sim.SPLs(p.Sum)), SPLPhaseDeg: phases(p.Sum)}
		for _, t := range p.SumDelay {
			doc.Sum.GroupDelayMS = append(doc.Sum.GroupDelayMS, number(1000*t))
		}
	}
	return doc
}

func summarize(s *sim.Summary, as []sim.Alignment) summaryDocument {
	doc := summaryDocument{
		BandHz:       numbers(s.Band[:]),
		MinImpedance: lowestDocument{number(s.MinImpedance), number(s.MinImpedanceAt)},
		MinEPDR:      lowestDocument{number(s.MinEPDR), number(s.MinEPDRAt)},
		Crossings:    []crossingDocument{},
		Alignment:    alignmentDocuments(as),
	}
	for _, c := range s.Crossings {
		doc.Crossings = append(doc.Crossings, crossingDocument{c.Low, c.High, number(c.Frequency), number(c.LevelDB), number(c.PhaseDeg)})
	}
	if s.Sum != nil {
		doc.Sum = &sumSummaryDocument{
			BandHz:    numbers(s.Sum.Band[:]),
			MeanSPLDB: number(s.Sum.MeanSPL), RippleDB: number(s.Sum.RippleDB), RMSDB: number(s.Sum.RMSDB),
			Low3DBHz: unlessZero(s.Sum.Low3DB), High3DBHz: unlessZero(s.Sum.High3DB),
			DipDB: unlessZero(s.Sum.DipDB), DipHz: unlessZero(s.Sum.DipAt),
		}
	}
	if s.Tone != nil {
		doc.Tone = &toneSummaryDocument{numbers(s.Tone.Freqs), numbers(s.Tone.GainDB), numbers(s.Tone.InsertionLossDB)}
	}
	return doc
}

// unlessZero returns v for JSON; null for 0, which stands for a frequency that was not found.
func unlessZero(v float64) *number {
	if v == 0 {
		return nil
	}
	n := number(v)
	return &n
}

// phases returns the phase in degrees of each z; null where z is 0 or infinite and has none.
func phases(z []complex128) []number {
	ns := numbers(sim.PhasesDeg(z))
	for i := range z {
		if !hasPhase(z[i]) {
			ns[i] = number(math.NaN())
		}
	}
	return ns
}
