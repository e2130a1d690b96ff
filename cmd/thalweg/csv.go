package main

import (
	"bytes"
	"encoding/csv"
)

// csvTable is a CSV result: one header row with units, one record per row.
type csvTable struct {
	b bytes.Buffer
	w *csv.Writer
}

func newCSV(header ...string) *csvTable {
	t := &csvTable{}
	t.w = csv.NewWriter(&t.b)
	t.row(header...)
	return t
}

// row appends a record; a write to memory does not fail.
func (t *csvTable) row(cells ...string) { _ = t.w.Write(cells) }

func (t *csvTable) bytes() ([]byte, error) {
	t.w.Flush()
	return t.b.Bytes(), t.w.Error()
}

// heads are the headings of a composition: Di_wt%, Ab_wt%, An_wt%.
func (s *subject) heads(prefix string) []string {
	out := make([]string, 3)
	for i, c := range s.sys.Components {
		out[i] = prefix + c.Symbol + "_" + s.basis.Unit()
	}
	return out
}

// cells are the three numbers of a composition.
func cells(percent [3]float64) []string {
	out := make([]string, 3)
	for i, v := range percent {
		out[i] = exact(part(v))
	}
	return out
}

// statusCSV is the last column of every record of a computed result.
func (s *subject) statusCSV(complete bool) string {
	if m := s.metastable(); m != "" {
		return status(complete) + "; " + m
	}
	return status(complete)
}
