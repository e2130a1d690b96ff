package main

import (
	"errors"
	"fmt"
	"strings"

	"thalweg/render"
	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// defaultSystem is worked on when no SYSTEM is named.
const defaultSystem = "di-ab-an"

// pascals per GPa.
const pascal = 1e9

// subject is the system that a command works on, with the file it came from.
type subject struct {
	given   string         // as it was named on the command line
	read    []render.Input // what was read beside the system
	file    *systems.File
	sys     *gibbs.System
	basis   ternary.Basis
	version string
	marked  bool // a temperature was marked as outside the file's range
}

// openFile reads the system named on the command line.
func (e *env) openFile(name string, quiet bool) (*systems.File, error) {
	if name == "" {
		name = defaultSystem
		e.notice(quiet, "no SYSTEM was named, so this is the built-in %s", name)
	}
	f, err := systems.Open(name)
	var unknown *systems.UnknownSystemError
	if errors.As(err, &unknown) && strings.Contains(name, "=") {
		return nil, &usageError{Where: "SYSTEM", What: err.Error(), Remedy: "a bulk composition is given by --bulk " + name, Err: err}
	}
	return f, badInput(err)
}

// open reads and compiles the system named on the command line.
func (e *env) open(o *systemFlags, quiet bool) (*subject, error) {
	f, err := e.openFile(o.System, quiet)
	if err != nil {
		return nil, err
	}
	pressure := f.PressureGPa
	if o.Pressure != nil {
		pressure = *o.Pressure
	}
	sys, err := f.At(pressure*pascal, o.Without)
	if err != nil {
		return nil, badSystem(err)
	}
	s := &subject{given: o.System, file: f, sys: sys, basis: o.basis, version: e.version}
	if s.given == "" {
		s.given = defaultSystem
	}
	if len(sys.Withheld) > 0 {
		e.notice(quiet, "%s", s.metastable())
	}
	return s, nil
}

// badSystem names the flag that the system does not agree with.
func badSystem(err error) error {
	u := &usageError{Err: err}
	var without *systems.WithoutError
	var pressure *systems.PressureError
	switch {
	case errors.As(err, &without):
		u.Where = "--without"
	case errors.As(err, &pressure):
		u.Where = "--pressure"
	}
	return u
}

// metastable is the mark that a result without some solid carries; empty if all
// solids are there.
func (s *subject) metastable() string {
	if len(s.sys.Withheld) == 0 {
		return ""
	}
	return "metastable: without " + strings.Join(s.sys.Withheld, ", ") + ", as if it did not nucleate"
}

// status is the one-word verdict of JSON and CSV.
func status(complete bool) string {
	if complete {
		return "complete"
	}
	return "incomplete"
}

// secondLiquid is the symbol of a liquid that coexists with the liquid of a point.
const secondLiquid = "L2"

// solid is the symbol of a phase that coexists with the liquid.
func (s *subject) solid(phase int) string {
	if phase < 0 || phase >= len(s.sys.Solids) {
		return secondLiquid
	}
	return s.sys.Solids[phase].Symbol
}

// names are the symbols of solids that coexist; a phase that is there twice, with
// two compositions, gets a prime the second time.
func (s *subject) names(states []gibbs.State) []string {
	out := make([]string, len(states))
	for i, st := range states {
		out[i] = s.solid(st.Phase)
		for _, other := range states[:i] {
			if other.Phase == st.Phase {
				out[i] += "′"
			}
		}
	}
	return out
}

// percent is a composition in percent of the basis in force.
func (s *subject) percent(x ternary.Composition) [3]float64 {
	f := s.sys.Components.Fractions(x, s.basis)
	return [3]float64{100 * f[0], 100 * f[1], 100 * f[2]}
}

// outside reports that the system file does not vouch for a temperature, K.
func (s *subject) outside(T float64) bool {
	return T < s.sys.Range[0] || T > s.sys.Range[1]
}

// vouched is the range for which the file vouches, in words.
func (s *subject) vouched() string {
	return fmt.Sprintf("%s to %s °C", short(celsius(s.sys.Range[0])), short(celsius(s.sys.Range[1])))
}

// provenance is one line on what made a result from what.
func (s *subject) provenance(options ...string) string {
	line := fmt.Sprintf("%s %s; system %s, SHA-256 %s; %s GPa", program, s.version, s.sys.Name, s.file.SHA256(), short(s.sys.Pressure/pascal))
	for _, o := range append(options, s.metastable()) {
		if o != "" {
			line += "; " + o
		}
	}
	return line
}

// notice prints a remark for the user.
func (e *env) notice(quiet bool, format string, args ...any) {
	if !quiet {
		fmt.Fprintf(e.err, "%s: notice: %s\n", program, fmt.Sprintf(format, args...))
	}
}
