package main

import (
	"fmt"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/join"
)

// placeJSON is a point of the diagram: percent of the end to, and °C.
type placeJSON [2]number

type joinFieldJSON struct {
	Phases  []string      `json:"phases"`
	Outline []placeJSON   `json:"outline"`
	Holes   [][]placeJSON `json:"holes"`
}

type joinLineJSON struct {
	Role   string      `json:"role"`
	Above  []string    `json:"above"` // of a vertical line: left
	Below  []string    `json:"below"` // right
	Comes  []string    `json:"comes"` // on cooling, or from left to right
	Goes   []string    `json:"goes"`
	Level  bool        `json:"level"`
	Points []placeJSON `json:"points"`
}

type levelJSON struct {
	TemperatureC number          `json:"temperature_C"`
	Kind         string          `json:"kind"`
	From         number          `json:"from"`
	To           number          `json:"to"`
	High         []reactantsJSON `json:"high"`
	Low          []reactantsJSON `json:"low"`
}

type reactantsJSON struct {
	phaseJSON
	Place *number `json:"place"` // null where the phase does not lie on the join
}

type joinReadingJSON struct {
	Place        number `json:"place"`
	TemperatureC number `json:"temperature_C"`
	readingJSON
}

type joinChecksJSON struct {
	Tested    int      `json:"tested"`
	Misplaced int      `json:"misplaced"`
	Passed    bool     `json:"passed"`
	Problems  []string `json:"problems"`
}

type joinJSON struct {
	headJSON
	From             amounts           `json:"from"`
	To               amounts           `json:"to"`
	PlaceUnit        string            `json:"place_unit"`
	DiagramRangeC    [2]number         `json:"diagram_range_C"`
	Fields           []joinFieldJSON   `json:"fields"`
	Lines            []joinLineJSON    `json:"lines"`
	Levels           []levelJSON       `json:"levels"`
	Nodes            []placeJSON       `json:"nodes"`
	Readings         []joinReadingJSON `json:"readings"`
	Checks           joinChecksJSON    `json:"checks"`
	ProvenanceRecord provenanceJSON    `json:"provenance"`
}

func (r *joinResult) json() joinJSON {
	c := &r.Checks
	j := joinJSON{headJSON: r.headJSON(len(r.reasons()) == 0), From: r.composition(r.From), To: r.composition(r.To),
		PlaceUnit:     fmt.Sprintf("%s of the end to (%s)", r.basis.Unit(), r.to),
		DiagramRangeC: [2]number{number(celsius(r.TMin)), number(celsius(r.TMax))},
		Fields:        []joinFieldJSON{}, Lines: []joinLineJSON{}, Levels: []levelJSON{}, Nodes: r.places(r.Nodes), Readings: []joinReadingJSON{},
		Checks: joinChecksJSON{c.Tested, c.Misplaced, c.Passed, list(c.Problems)},
		ProvenanceRecord: r.provenanceJSON(map[string]any{"basis": r.basis.String(), "pressure_GPa": number(r.sys.Pressure / pascal),
			"without": list(r.sys.Withheld), "from": r.from, "to": r.to})}
	for i := range r.Fields {
		f := &r.Fields[i]
		q := joinFieldJSON{Phases: r.symbols(f.Phases), Outline: r.places(f.Outline), Holes: [][]placeJSON{}}
		for _, h := range f.Holes {
			q.Holes = append(q.Holes, r.places(h))
		}
		j.Fields = append(j.Fields, q)
	}
	for i := range r.Lines {
		l := &r.Lines[i]
		comes, goes := l.Change()
		j.Lines = append(j.Lines, joinLineJSON{r.role(l), r.symbols(l.Above), r.symbols(l.Below), r.symbols(comes), r.symbols(goes), l.Horizontal, r.places(l.Points)})
	}
	for i := range r.Levels {
		l := &r.Levels[i]
		q := l.Reaction(r.sys)
		j.Levels = append(j.Levels, levelJSON{number(celsius(l.T)), q.Kind, number(r.percentTo(l.From)), number(r.percentTo(l.To)), r.reactants(q.High), r.reactants(q.Low)})
	}
	for i, q := range r.readings {
		j.Readings = append(j.Readings, joinReadingJSON{number(r.percentTo(r.xs[i])), number(celsius(r.at[i])), r.readingJSON(&r.samples[i], q)})
	}
	return j
}

func (r *joinResult) places(pts []join.Point) []placeJSON {
	out := []placeJSON{}
	for _, p := range pts {
		out = append(out, placeJSON{number(r.percentTo(p.X)), number(celsius(p.T))})
	}
	return out
}

// symbols are those of phases; never null in JSON.
func (s *subject) symbols(phases []int) []string {
	out := []string{}
	for _, p := range phases {
		out = append(out, s.anyPhase(p))
	}
	return out
}

func (r *joinResult) reactants(states []gibbs.State) []reactantsJSON {
	out := []reactantsJSON{}
	for _, st := range states {
		q := reactantsJSON{phaseJSON: phaseJSON{r.anyPhase(st.Phase), r.composition(st.Composition())}}
		if x, off := r.Along(st.Composition()); off < 1e-6 {
			v := number(r.percentTo(x))
			q.Place = &v
		}
		out = append(out, q)
	}
	return out
}

// csv has one record for each point of each line.
func (r *joinResult) csv() ([]byte, error) {
	t := newCSV(append([]string{"line", "role", "above", "below", "place_" + r.basis.Unit(), "temperature_C"}, append(r.heads(""), "status")...)...)
	complete := len(r.reasons()) == 0
	for i := range r.Lines {
		l := &r.Lines[i]
		for _, p := range l.Points {
			row := []string{fmt.Sprint(i + 1), r.role(l), r.assemblage(l.Above), r.assemblage(l.Below), exact(r.percentTo(p.X)), exact(celsius(p.T))}
			t.row(append(append(row, cells(r.percent(r.At(p.X)))...), r.statusCSV(complete))...)
		}
	}
	return t.bytes()
}
