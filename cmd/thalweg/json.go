package main

import (
	"bytes"
	"encoding/json"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// number is a float64 that JSON can hold: NaN and infinities become null, and
// rounding noise beyond ten digits is cut.
type number float64

// MarshalJSON implements json.Marshaler.
func (n number) MarshalJSON() ([]byte, error) {
	if s := exact(float64(n)); s != "" {
		return []byte(s), nil
	}
	return []byte("null"), nil
}

// amounts is an object whose keys keep their order: components in the order of
// the system, phases in the order of a reaction.
type amounts []amount

type amount struct {
	key   string
	value number
}

// MarshalJSON implements json.Marshaler.
func (a amounts) MarshalJSON() ([]byte, error) {
	var b bytes.Buffer
	b.WriteByte('{')
	for i, p := range a {
		if i > 0 {
			b.WriteByte(',')
		}
		key, err := json.Marshal(p.key)
		if err != nil {
			return nil, err
		}
		value, err := p.value.MarshalJSON()
		if err != nil {
			return nil, err
		}
		b.Write(key)
		b.WriteByte(':')
		b.Write(value)
	}
	b.WriteByte('}')
	return b.Bytes(), nil
}

// toJSON is one object, indented, with a final newline.
func toJSON(v any) ([]byte, error) {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	err := enc.Encode(v)
	return b.Bytes(), err
}

// composition is a composition in percent of the basis in force.
func (s *subject) composition(x ternary.Composition) amounts {
	out := make(amounts, 3)
	for i, v := range s.percent(x) {
		out[i] = amount{s.sys.Components[i].Symbol, number(part(v))}
	}
	return out
}

// headJSON is what every computed result begins with.
type headJSON struct {
	System            string          `json:"system"`
	Title             string          `json:"title"`
	Status            string          `json:"status"` // complete or incomplete
	Basis             string          `json:"basis"`
	CompositionUnit   string          `json:"composition_unit"`
	Components        []componentJSON `json:"components"`
	PressureGPa       number          `json:"pressure_GPa"`
	TemperatureRangeC [2]number       `json:"temperature_range_C"`
	Metastable        bool            `json:"metastable"`
	Withheld          []string        `json:"withheld"`
	Remarks           []remarkJSON    `json:"remarks"`
	Limits            []string        `json:"limits"`
	Cautions          []string        `json:"cautions"`
}

type componentJSON struct {
	Symbol    string `json:"symbol"`
	Name      string `json:"name"`
	Formula   string `json:"formula"`
	MolarMass number `json:"molar_mass_g_per_mol"`
}

type remarkJSON struct {
	Phase  string `json:"phase"`
	Remark string `json:"remark"`
}

type phaseJSON struct {
	Phase       string  `json:"phase"`
	Composition amounts `json:"composition"`
}

type provenanceJSON struct {
	Program      string `json:"program"`
	Version      string `json:"version"`
	SystemSHA256 string `json:"system_sha256"`
	Options      any    `json:"options"`
}

func (s *subject) headJSON(complete bool) headJSON {
	h := headJSON{
		System: s.sys.Name, Title: s.sys.Title, Status: status(complete),
		Basis: s.basis.String(), CompositionUnit: s.basis.Unit(),
		Components:  componentsJSON(s.sys.Components),
		PressureGPa: number(s.sys.Pressure / pascal), TemperatureRangeC: [2]number{number(celsius(s.sys.Range[0])), number(celsius(s.sys.Range[1]))},
		Metastable: len(s.sys.Withheld) > 0, Withheld: list(s.sys.Withheld), Remarks: []remarkJSON{},
		Limits: list(s.file.Limits), Cautions: list(s.file.Cautions),
	}
	for _, p := range s.sys.Solids {
		if p.Remark != "" {
			h.Remarks = append(h.Remarks, remarkJSON{p.Symbol, p.Remark})
		}
	}
	return h
}

func componentsJSON(cs ternary.Components) []componentJSON {
	var out []componentJSON
	for _, c := range cs {
		out = append(out, componentJSON{c.Symbol, c.Name, c.Formula.String(), number(c.Formula.MolarMass())})
	}
	return out
}

// phases are solids that coexist, with their compositions.
func (s *subject) phases(states []gibbs.State) []phaseJSON {
	out := make([]phaseJSON, len(states))
	for i, name := range s.names(states) {
		out[i] = phaseJSON{name, s.composition(states[i].Composition())}
	}
	return out
}

func (s *subject) provenanceJSON(options any) provenanceJSON {
	return provenanceJSON{program, s.version, s.file.SHA256(), options}
}

// list is never null in JSON.
func list(s []string) []string {
	if s == nil {
		return []string{}
	}
	return s
}
