package main

import "thalweg/ternary/pressure"

type pressureJSON struct {
	headJSON
	PressuresGPa []number       `json:"pressures_GPa"`
	Points       []trackJSON    `json:"points"`
	Changes      []changeJSON   `json:"changes"`
	Problems     []string       `json:"problems"`
	Provenance   provenanceJSON `json:"provenance"`
}

type trackJSON struct {
	Solids []string    `json:"solids"`
	Edge   []string    `json:"edge"`
	At     []sightJSON `json:"at"`
}

type sightJSON struct {
	PressureGPa  number  `json:"pressure_GPa"`
	TemperatureC number  `json:"temperature_C"`
	Kind         string  `json:"kind"`
	Liquid       amounts `json:"liquid"`
}

type changeJSON struct {
	PressureGPa  number   `json:"pressure_GPa"`
	Kind         string   `json:"kind"`
	What         string   `json:"what"`
	Solids       []string `json:"solids"` // of the point, or that of the field
	Edge         []string `json:"edge"`
	TemperatureC *number  `json:"temperature_C"` // of the point; null for a field
	From         *string  `json:"from"`          // kinds of a point whose kind changes
	To           *string  `json:"to"`
}

func (r *pressureResult) json() pressureJSON {
	s := r.series
	j := pressureJSON{headJSON: r.headJSON(len(s.Problems) == 0), PressuresGPa: []number{}, Points: []trackJSON{}, Changes: []changeJSON{}, Problems: list(s.Problems),
		Provenance: r.provenanceJSON(map[string]any{"basis": r.basis.String(), "without": list(r.sys.Withheld),
			"from_GPa": number(s.Pressures[0] / pascal), "to_GPa": number(s.Pressures[len(s.Pressures)-1] / pascal), "count": len(s.Pressures)})}
	for _, P := range s.Pressures {
		j.PressuresGPa = append(j.PressuresGPa, number(P/pascal))
	}
	for i := range s.Points {
		t := &s.Points[i]
		q := trackJSON{Solids: []string{}, Edge: r.edge(&t.At[0].Node), At: []sightJSON{}}
		for _, p := range t.Solids {
			q.Solids = append(q.Solids, r.anyPhase(p))
		}
		for _, a := range t.At {
			q.At = append(q.At, sightJSON{number(s.Pressures[a.Index] / pascal), number(celsius(a.Node.T)), string(a.Node.Kind), r.composition(a.Node.Liquid)})
		}
		j.Points = append(j.Points, q)
	}
	for i := range s.Changes {
		c := &s.Changes[i]
		j.Changes = append(j.Changes, r.changeJSON(c))
	}
	return j
}

func (r *pressureResult) changeJSON(c *pressure.Change) changeJSON {
	j := changeJSON{PressureGPa: number(c.Pressure / pascal), Kind: string(c.Kind), What: r.said(c), Solids: []string{}}
	if c.Solid >= 0 {
		j.Solids, j.Edge = append(j.Solids, r.anyPhase(c.Solid)), []string{}
		return j
	}
	for _, p := range c.Solids {
		j.Solids = append(j.Solids, r.anyPhase(p))
	}
	T := number(celsius(c.Node.T))
	j.Edge, j.TemperatureC = r.edge(&c.Node), &T
	if c.Kind == pressure.KindChanged {
		from, to := string(c.From), string(c.To)
		j.From, j.To = &from, &to
	}
	return j
}
