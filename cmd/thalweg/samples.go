package main

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"path/filepath"
	"slices"
	"strings"
	"unicode/utf8"

	"thalweg/ternary"
)

// sample is one row of a table of samples.
type sample struct {
	Name string
	X    ternary.Composition
	Sum  float64  // of the components as written
	More []string // the values in the further columns that were asked for
}

// maxSamples is the size in bytes beyond which a table of samples is taken for
// the wrong file; it holds some hundred thousand rows.
const maxSamples = 8 << 20

// nameColumn heads the column of the samples' names.
const nameColumn = "name"

// readSamples reads a CSV file with a header: name and the three component
// symbols, in any order. Amounts are in basis b. Lines that begin with # are
// skipped. Every error names file, line and column. data are the bytes read.
func readSamples(path string, cs ternary.Components, b ternary.Basis, more ...string) (list []sample, data []byte, err error) {
	whole := func(what, remedy string, err error) ([]sample, []byte, error) {
		return nil, nil, &usageError{Where: path, What: what, Remedy: remedy, Err: err}
	}
	if !strings.EqualFold(filepath.Ext(path), ".csv") {
		return whole("its name does not end in .csv", "give a table of comma-separated values", nil)
	}
	data, tooLarge, err := readLimited(path, maxSamples)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return whole("there is no such file", "check the path", err)
	case err != nil:
		return whole("it cannot be read: "+plainCause(err).Error(), "check the path", err)
	case tooLarge:
		return whole(fmt.Sprintf("it is larger than %d MiB", maxSamples>>20), "is it the right file?", nil)
	}
	table := bytes.TrimPrefix(data, []byte("\uFEFF"))
	switch {
	case len(bytes.TrimSpace(table)) == 0:
		return whole("it is empty", "give a header line "+sampleHeader(cs)+" and one line for each sample", nil)
	case !utf8.Valid(table):
		return whole("it is not UTF-8 text", "save it as CSV in UTF-8", nil)
	}
	r := &sampleReader{path: path, cs: cs, basis: b, csv: csv.NewReader(bytes.NewReader(table)), names: map[string]int{}, more: more}
	list, err = r.read()
	return list, data, err
}

func sampleHeader(cs ternary.Components) string {
	return strings.Join([]string{nameColumn, cs[0].Symbol, cs[1].Symbol, cs[2].Symbol}, ",")
}

// sampleReader reads one table.
type sampleReader struct {
	path   string
	cs     ternary.Components
	basis  ternary.Basis
	csv    *csv.Reader
	name   int      // column of the names
	column [3]int   // columns of the components
	more   []string // headings of further columns to be read
	moreAt []int
	width  int
	names  map[string]int // line of each name
}

// fail is the error of one cell, column counted from 0.
func (r *sampleReader) fail(line, column int, what, remedy string) error {
	return &usageError{Where: fmt.Sprintf("%s: line %d, column %d", r.path, line, column+1), What: what, Remedy: remedy}
}

func (r *sampleReader) read() ([]sample, error) {
	r.csv.Comment = '#'
	r.csv.TrimLeadingSpace = true
	r.csv.FieldsPerRecord = -1 // counted here, for a better message
	header, err := r.record()
	if err != nil {
		return nil, err
	}
	if err := r.header(header); err != nil {
		return nil, err
	}
	var out []sample
	for {
		rec, err := r.record()
		if err == io.EOF {
			break
		}
		if err != nil {
			return nil, err
		}
		s, err := r.row(rec)
		if err != nil {
			return nil, err
		}
		out = append(out, s)
	}
	if len(out) == 0 {
		return nil, &usageError{Where: r.path, What: "it has a header but no sample", Remedy: "add one line for each sample"}
	}
	return out, nil
}

// record reads the next line that is not empty.
func (r *sampleReader) record() ([]string, error) {
	rec, err := r.csv.Read()
	var syntax *csv.ParseError
	if errors.As(err, &syntax) {
		return nil, &usageError{Where: fmt.Sprintf("%s: line %d, character %d", r.path, syntax.Line, syntax.Column),
			What: "this is not CSV: " + syntax.Err.Error(), Remedy: "correct the line", Err: err}
	}
	return rec, err
}

// header finds the columns.
func (r *sampleReader) header(rec []string) error {
	line, _ := r.csv.FieldPos(0)
	if len(rec) == 1 && strings.ContainsAny(rec[0], ";\t") {
		return r.fail(line, 0, "the columns are not separated by commas", "save the table with commas and decimal points")
	}
	r.name, r.column, r.width = -1, [3]int{-1, -1, -1}, len(rec)
	r.moreAt = slices.Repeat([]int{-1}, len(r.more))
	for k, head := range rec {
		head = strings.TrimSpace(head)
		place := &r.name
		if i, ok := r.cs.Index(head); ok {
			place = &r.column[i]
		} else if i := slices.Index(r.more, head); i >= 0 {
			place = &r.moreAt[i]
		} else if head != nameColumn {
			if len(r.more) > 0 {
				continue // a table with columns of its own
			}
			return r.fail(line, k, fmt.Sprintf("the heading %q is unknown", head), "the columns are "+sampleHeader(r.cs))
		}
		if *place >= 0 {
			return r.fail(line, k, fmt.Sprintf("the heading %q stands here for the second time", head), "remove one of the two columns")
		}
		*place = k
	}
	if r.name < 0 {
		return r.fail(line, 0, "there is no column "+nameColumn, "the columns are "+sampleHeader(r.cs))
	}
	for i, k := range r.column {
		if k < 0 {
			return r.fail(line, len(rec)-1, "there is no column "+r.cs[i].Symbol, "the columns are "+sampleHeader(r.cs)+"; write 0 where a sample has none of a component")
		}
	}
	for i, k := range r.moreAt {
		if k < 0 {
			return r.fail(line, len(rec)-1, "there is no column "+r.more[i], "add it, or name another column")
		}
	}
	return nil
}

// row reads one sample.
func (r *sampleReader) row(rec []string) (s sample, err error) {
	line, _ := r.csv.FieldPos(0)
	if len(rec) != r.width {
		return s, r.fail(line, min(len(rec), r.width+1)-1, fmt.Sprintf("there are %d values, but %d columns", len(rec), r.width), "write decimals with a point, and put a name that holds a comma between double quotes")
	}
	at := func(k int) int { l, _ := r.csv.FieldPos(k); return l }
	s.Name = strings.TrimSpace(rec[r.name])
	if s.Name == "" {
		return s, r.fail(at(r.name), r.name, "the sample has no name", "name it")
	}
	if first, ok := r.names[s.Name]; ok {
		return s, r.fail(at(r.name), r.name, fmt.Sprintf("the name %q stands already in line %d", s.Name, first), "give each sample its own name")
	}
	r.names[s.Name] = line
	for _, k := range r.moreAt {
		s.More = append(s.More, strings.TrimSpace(rec[k]))
	}
	var amounts [3]float64
	for i, k := range r.column {
		if amounts[i], err = parseAmount(rec[k]); err != nil {
			return s, r.fail(at(k), k, fmt.Sprintf("the amount of %s, %s", r.cs[i].Symbol, err), "give a number, 0 where there is none")
		}
		s.Sum += amounts[i]
	}
	if s.X, err = r.cs.Composition(amounts, r.basis); err != nil {
		return s, r.fail(line, r.column[0], fmt.Sprintf("the components of %q sum to %g, so there is nothing to normalise", s.Name, s.Sum), "correct the row or remove it")
	}
	return s, nil
}

// loadSamples reads the table and says what was normalised.
func (e *env) loadSamples(path string, s *subject, quiet bool, more ...string) ([]sample, error) {
	list, data, err := readSamples(path, s.sys.Components, s.basis, more...)
	if err != nil {
		return nil, err
	}
	s.input("samples", path, data)
	var off []string
	for _, p := range list {
		if !normalised(p.Sum) {
			off = append(off, fmt.Sprintf("%s (%s)", p.Name, short(p.Sum)))
		}
	}
	if n := len(off); n > 5 {
		off = append(off[:5], fmt.Sprintf("and %d more", n-5))
	}
	if len(off) > 0 {
		e.notice(quiet, "%s: these samples did not sum to 100 and were normalised: %s", path, strings.Join(off, ", "))
	}
	return list, nil
}
