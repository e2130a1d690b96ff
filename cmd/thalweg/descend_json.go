package main

import (
	"thalweg/ternary/descent"
)

// pathJSON is the result of the verbs descend and melt. Its keys are a promise to programs
// that read them.
type pathJSON struct {
	headJSON
	Name        string          `json:"name"` // of the sample; empty for --bulk
	Bulk        amounts         `json:"bulk"`
	Mode        string          `json:"mode"`
	LiquidusC   *number         `json:"liquidus_temperature_C"`
	SolidusC    *number         `json:"solidus_temperature_C,omitempty"` // of melting
	Steps       []stepJSON      `json:"steps"`
	End         *endJSON        `json:"end"`    // null when the path could not be followed
	Checks      *pathChecksJSON `json:"checks"` // likewise
	NotFollowed string          `json:"not_followed,omitempty"`
	Provenance  provenanceJSON  `json:"provenance"`
}

// pathsJSON is the result for a table of samples.
type pathsJSON struct {
	Paths []*pathJSON `json:"paths"`
}

type stepJSON struct {
	TemperatureC  number      `json:"temperature_C"`
	Event         string      `json:"event"`
	Liquid        amounts     `json:"liquid"`         // the last liquid there was, in a step without melt
	Pool          amounts     `json:"pool,omitempty"` // in fractional melting, all melt removed so far
	MeltMass      number      `json:"melt_fraction_mass"`
	MeltMole      number      `json:"melt_fraction_mole"`
	Solids        []solidStep `json:"solids"`
	Contact       []solidStep `json:"in_contact"`    // that part of the solids that can react with the liquid
	Crystallising []string    `json:"crystallising"` // on heating, what melts
	Forming       []phaseJSON `json:"forming"`       // what crystallises, with its composition
	Heat          number      `json:"heat_J_per_g"`
	Affinity      amounts     `json:"affinity_J_per_mol"`
}

type solidStep struct {
	Phase        string  `json:"phase"`
	FractionMass number  `json:"fraction_mass"`
	Composition  amounts `json:"composition"`
}

type endJSON struct {
	TemperatureC number `json:"temperature_C"`
	Reason       string `json:"reason"`
}

type pathChecksJSON struct {
	MassBalance   number   `json:"mass_balance"`
	MeltMonotone  bool     `json:"melt_monotone"`
	TMonotone     bool     `json:"temperature_monotone"`
	PhaseRule     bool     `json:"phase_rule"`
	MaxDrive      number   `json:"max_drive_RT"`
	StableAgainst bool     `json:"stable_against_absent_solids"`
	Passed        bool     `json:"passed"`
	Problems      []string `json:"problems"`
}

type descendOptionsJSON struct {
	Basis       string   `json:"basis"`
	PressureGPa number   `json:"pressure_GPa"`
	Without     []string `json:"without"`
	Mode        string   `json:"mode"`
	Retain      number   `json:"retain"`
	Removals    []string `json:"removals"`
}

// json is one path for --bulk, and a list of paths for a table of samples.
func (r *pathsResult) json() any {
	if !r.table {
		return r.pathJSON(&r.courses[0])
	}
	out := pathsJSON{Paths: []*pathJSON{}}
	for i := range r.courses {
		out.Paths = append(out.Paths, r.pathJSON(&r.courses[i]))
	}
	return out
}

func (r *pathsResult) pathJSON(c *course) *pathJSON {
	j := &pathJSON{
		headJSON: r.headJSON(c.complete()), Name: c.Name, Bulk: r.composition(c.X), Mode: string(r.mode), Steps: []stepJSON{},
		Provenance: r.provenanceJSON(descendOptionsJSON{r.basis.String(), number(r.sys.Pressure / pascal), list(r.sys.Withheld), string(r.mode), number(r.retain), texts(r.removals)}),
	}
	if c.err != nil {
		j.NotFollowed = c.err.Error()
		return j
	}
	p := c.path
	T := number(celsius(p.LiquidT))
	j.LiquidusC, j.End, j.Checks = &T, &endJSON{number(celsius(p.EndT)), p.Reason}, newPathChecksJSON(&p.Checks)
	if r.mode.Melts() {
		T := number(celsius(p.Steps[0].T))
		j.SolidusC = &T
	}
	for i := range p.Steps {
		j.Steps = append(j.Steps, r.stepJSON(&p.Steps[i]))
	}
	return j
}

func (r *pathsResult) stepJSON(s *descent.Step) stepJSON {
	j := stepJSON{
		TemperatureC: number(celsius(s.T)), Event: s.Event, Liquid: r.composition(s.Liquid),
		MeltMass: number(part(s.MeltMass)), MeltMole: number(part(s.MeltMole)), Heat: number(part(s.Heat)),
		Solids: r.solidSteps(s.Solids), Contact: r.solidSteps(s.Contact), Crystallising: []string{}, Forming: r.phases(s.Instant), Affinity: amounts{},
	}
	if r.mode == descent.FractionalMelting {
		j.Pool = r.composition(s.Pool)
	}
	for _, k := range s.Crystallising {
		j.Crystallising = append(j.Crystallising, r.solid(k))
	}
	for i, a := range s.Affinity {
		j.Affinity = append(j.Affinity, amount{r.solid(i), number(drive(a))})
	}
	return j
}

func (r *pathsResult) solidSteps(list []descent.Amount) []solidStep {
	out := []solidStep{}
	for _, a := range list {
		out = append(out, solidStep{r.solid(a.State.Phase), number(part(a.Mass)), r.composition(a.State.Composition())})
	}
	return out
}

func newPathChecksJSON(c *descent.Checks) *pathChecksJSON {
	return &pathChecksJSON{number(c.MassBalance), c.MeltMonotone, c.TMonotone, c.PhaseRule, number(c.MaxDrive), c.StableAgainst, c.Passed, list(c.Problems)}
}
