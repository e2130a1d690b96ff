package main

import (
	"thalweg/ternary"
	"thalweg/ternary/section"
)

// regionJSON is one region of a section.
type regionJSON struct {
	Phases   []string     `json:"phases"`
	Area     number       `json:"area_fraction"`
	Outline  []amounts    `json:"outline"`
	Holes    [][]amounts  `json:"holes"`
	TieLines [][2]amounts `json:"tie_lines"`
	Corners  []phaseJSON  `json:"corners"`
}

type sectionJSON struct {
	TemperatureC number            `json:"temperature_C"`
	Regions      []regionJSON      `json:"regions"`
	Critical     []amounts         `json:"critical"`
	Samples      []readingJSON     `json:"samples"`
	Checks       sectionChecksJSON `json:"checks"`
}

type readingJSON struct {
	Name   string        `json:"name"`
	Bulk   amounts       `json:"bulk"`
	Phases []readingPart `json:"phases"` // null where the equilibrium could not be computed
}

type readingPart struct {
	Phase        string  `json:"phase"`
	FractionMass number  `json:"fraction_mass"`
	FractionMole number  `json:"fraction_mole"`
	Composition  amounts `json:"composition"`
}

type sectionChecksJSON struct {
	Area      number   `json:"area"`
	Tested    int      `json:"tested"`
	Misplaced int      `json:"misplaced"`
	Residual  number   `json:"max_residual_RT"`
	Passed    bool     `json:"passed"`
	Problems  []string `json:"problems"`
}

type sectionsJSON struct {
	headJSON
	Sections   []sectionJSON  `json:"sections"`
	Provenance provenanceJSON `json:"provenance"`
}

func (r *sectionsResult) json() sectionsJSON {
	complete := len(r.reasons()) == 0
	j := sectionsJSON{headJSON: r.headJSON(complete), Sections: []sectionJSON{},
		Provenance: r.provenanceJSON(map[string]any{"basis": r.basis.String(), "pressure_GPa": number(r.sys.Pressure / pascal), "without": list(r.sys.Withheld)})}
	for i, s := range r.sections {
		c := &s.Checks
		q := sectionJSON{TemperatureC: number(celsius(s.T)), Regions: []regionJSON{}, Critical: []amounts{}, Samples: []readingJSON{},
			Checks: sectionChecksJSON{number(c.Area), c.Tested, c.Misplaced, number(c.MaxResidual), c.Passed, list(c.Problems)}}
		for k := range s.Regions {
			q.Regions = append(q.Regions, r.regionJSON(&s.Regions[k]))
		}
		for _, x := range s.Critical {
			q.Critical = append(q.Critical, r.composition(x))
		}
		for k, e := range r.readings[i] {
			q.Samples = append(q.Samples, r.readingJSON(&r.samples[k], e))
		}
		j.Sections = append(j.Sections, q)
	}
	return j
}

func (r *sectionsResult) regionJSON(g *section.Region) regionJSON {
	j := regionJSON{Phases: []string{}, Area: number(part(r.regionArea(g))), Outline: r.ringJSON(g.Outline), Holes: [][]amounts{}, TieLines: [][2]amounts{}, Corners: []phaseJSON{}}
	for _, p := range g.Phases {
		j.Phases = append(j.Phases, r.anyPhase(p))
	}
	for _, h := range g.Holes {
		j.Holes = append(j.Holes, r.ringJSON(h))
	}
	for _, t := range g.TieLines {
		j.TieLines = append(j.TieLines, [2]amounts{r.composition(t.Ends[0]), r.composition(t.Ends[1])})
	}
	for _, c := range g.Corners {
		j.Corners = append(j.Corners, phaseJSON{r.anyPhase(c.Phase), r.composition(c.Composition())})
	}
	return j
}

// ringJSON is a closed outline, its first point not repeated.
func (s *subject) ringJSON(xs []ternary.Composition) []amounts {
	out := []amounts{}
	for _, x := range xs {
		out = append(out, s.composition(x))
	}
	return out
}

func (s *subject) readingJSON(q *sample, e reading) readingJSON {
	j := readingJSON{Name: q.Name, Bulk: s.composition(q.X)}
	if e.err != nil {
		return j
	}
	j.Phases = []readingPart{}
	for _, p := range e.Parts {
		mass, mole := s.share(e.Equilibrium, &p)
		j.Phases = append(j.Phases, readingPart{s.anyPhase(p.State.Phase), number(part(mass)), number(part(mole)), s.composition(p.State.Composition())})
	}
	return j
}
