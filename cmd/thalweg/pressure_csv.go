package main

// csv has one record for each point at each pressure, and one for each change.
func (r *pressureResult) csv() ([]byte, error) {
	s := r.series
	t := newCSV(append([]string{"record", "point", "pressure_GPa", "temperature_C", "kind"}, append(r.heads(""), "status")...)...)
	state := r.statusCSV(len(s.Problems) == 0)
	for i := range s.Points {
		q := &s.Points[i]
		for _, a := range q.At {
			row := []string{"point", r.pointName(q.Solids, q.Edge), exact(s.Pressures[a.Index] / pascal), exact(celsius(a.Node.T)), string(a.Node.Kind)}
			t.row(append(append(row, cells(r.percent(a.Node.Liquid))...), state)...)
		}
	}
	for i := range s.Changes {
		c := &s.Changes[i]
		t.row("change", r.said(c), exact(c.Pressure/pascal), "", string(c.Kind), "", "", "", state)
	}
	return t.bytes()
}
