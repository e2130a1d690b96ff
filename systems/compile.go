package systems

import (
	"fmt"
	"path/filepath"
	"slices"
	"strings"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Units of the file in those of the computation.
const (
	pascal      = 1e9  // per GPa
	joule       = 1e3  // per kJ
	cubicMetre  = 1e-6 // per cm³
	samePascals = 1.0  // pressures closer than this are the same
)

// WithoutError says that a phase to be withheld is unknown.
type WithoutError struct {
	Symbol string
	Known  []string // symbols of the solids, in the order of the file
}

// Error names the phase and those that can be withheld.
func (e *WithoutError) Error() string {
	s := fmt.Sprintf("there is no solid %q to leave out", e.Symbol)
	if e.Symbol == LiquidSymbol {
		s = "the liquid cannot be left out"
	}
	return s + "; " + known(e.Known)
}

// PressureError says that a file does not hold what a pressure needs or, with both
// lists empty, that the pressure itself is at fault.
type PressureError struct {
	PressureGPa, ReferenceGPa float64
	Missing                   []string // members without a change of volume
	Ended                     []string // members whose melting curve has no point at so low a pressure
}

// Error names the pressure and the members that have nothing to say at it.
func (e *PressureError) Error() string {
	switch {
	case len(e.Ended) > 0:
		return fmt.Sprintf("at %g GPa the melting curve of %s (simon_a_GPa) is at or below absolute zero; stay closer to the %g GPa for which the system is given",
			e.PressureGPa, strings.Join(e.Ended, ", "), e.ReferenceGPa)
	case len(e.Missing) == 0:
		return fmt.Sprintf("%g GPa is not a pressure from 0 to %g GPa", e.PressureGPa, maxPressureGPa)
	}
	return fmt.Sprintf("the system is given at %g GPa, and its file has no change of volume (dV_cm3) for %s, so nothing can be said at %g GPa; leave the pressure out or add dV_cm3, or for melting slope_C_per_GPa or simon_a_GPa and simon_c",
		e.ReferenceGPa, strings.Join(e.Missing, ", "), e.PressureGPa)
}

// At compiles the system at a pressure (Pa), leaving out the solids named in
// without. The errors are [*PressureError] and [*WithoutError]. A standard state
// that is counted from a withheld solid is not affected: the solid is left out
// of the diagram, not out of the thermodynamics.
func (f *File) At(pressurePa float64, without []string) (*gibbs.System, error) {
	withheld, err := f.withheld(without)
	if err != nil {
		return nil, err
	}
	dP, err := f.pressureChange(pressurePa)
	if err != nil {
		return nil, err
	}
	c := &compiler{f: f, dP: dP, done: map[[2]int]gibbs.TFunc{}}
	sys := &gibbs.System{
		Name: strings.TrimSuffix(filepath.Base(f.Name), ending), Title: f.Title,
		Components: f.Components, Pressure: pressurePa,
		Range:    [2]float64{f.TemperatureC[0] + ternary.ZeroCelsius, f.TemperatureC[1] + ternary.ZeroCelsius},
		Withheld: withheld,
	}
	c.liquid = gibbs.NewLiquid(f.Components, mixing(f.Liquid, symbolsOf(f.Components)))
	sys.Liquid = c.liquid
	for i, s := range f.Solids {
		if slices.Contains(withheld, s.Symbol) {
			continue
		}
		p, err := c.phase(i)
		if err != nil {
			return nil, err
		}
		sys.Solids = append(sys.Solids, p)
	}
	return sys, nil
}

// AtReference compiles the system at the reference pressure of its file.
func (f *File) AtReference(without []string) (*gibbs.System, error) {
	return f.At(f.PressureGPa*pascal, without)
}

// withheld checks the solids to leave out and puts them in the order of the
// file, each once.
func (f *File) withheld(without []string) ([]string, error) {
	all := f.SolidSymbols()
	for _, s := range without {
		if !slices.Contains(all, s) {
			return nil, &WithoutError{s, all}
		}
	}
	var out []string
	for _, s := range all {
		if slices.Contains(without, s) {
			out = append(out, s)
		}
	}
	if len(out) == len(all) && len(all) > 0 {
		return nil, fmt.Errorf("all solids are left out (%s), so nothing can crystallise; keep at least one", strings.Join(out, ", "))
	}
	return out, nil
}

// SolidSymbols lists the symbols of the solids in the order of the file.
func (f *File) SolidSymbols() []string {
	out := make([]string, len(f.Solids))
	for i, s := range f.Solids {
		out[i] = s.Symbol
	}
	return out
}

// pressureChange is the pressure above the reference, Pa.
func (f *File) pressureChange(pressurePa float64) (float64, error) {
	e := &PressureError{PressureGPa: pressurePa / pascal, ReferenceGPa: f.PressureGPa}
	if !(pressurePa >= 0 && pressurePa <= maxPressureGPa*pascal) {
		return 0, e
	}
	dP := pressurePa - f.PressureGPa*pascal
	if dP < samePascals && dP > -samePascals {
		return 0, nil
	}
	for _, s := range f.Solids {
		for _, m := range s.Members {
			name := s.Symbol
			if len(s.Members) > 1 || m.Symbol != s.Symbol {
				name += "." + m.Symbol
			}
			if !m.State.Compressible() {
				e.Missing = append(e.Missing, name)
			}
			if a := m.State.CurveA; a.Given && a.Value*pascal+dP <= 0 {
				e.Ended = append(e.Ended, name)
			}
		}
	}
	if len(e.Missing)+len(e.Ended) > 0 {
		return 0, e
	}
	return dP, nil
}

// compiler resolves the standard states, each once.
type compiler struct {
	f      *File
	dP     float64
	liquid *gibbs.Phase
	done   map[[2]int]gibbs.TFunc
}

// phase builds solid i of the file.
func (c *compiler) phase(i int) (*gibbs.Phase, error) {
	s := &c.f.Solids[i]
	p := &gibbs.Phase{Symbol: s.Symbol, Name: s.Name, Remark: s.Remark}
	var symbols []string
	for k, m := range s.Members {
		g, err := c.standard([2]int{i, k})
		if err != nil {
			return nil, fmt.Errorf("solid %s, member %s: %w", s.Symbol, m.Symbol, err)
		}
		p.Members = append(p.Members, gibbs.EndMember{Symbol: m.Symbol, Formula: m.Formula, C: m.Composition, G: g})
		symbols = append(symbols, m.Symbol)
	}
	p.Mixing = mixing(s.Mixing, symbols)
	return p.Prepare(), nil
}

// standard is the standard Gibbs energy of one member. The checks of the file
// have made sure that the references end.
func (c *compiler) standard(at [2]int) (gibbs.TFunc, error) {
	if g, ok := c.done[at]; ok {
		return g, nil
	}
	m := &c.f.Solids[at[0]].Members[at[1]]
	g, err := c.state(m)
	if err != nil {
		return g, err
	}
	c.done[at] = g
	return g, nil
}

func (c *compiler) state(m *Member) (gibbs.TFunc, error) {
	st := &m.State
	t := st.T.Value + ternary.ZeroCelsius
	h, v := st.H.Value*joule, st.V.Value*cubicMetre
	if st.Kind == Melting {
		fusion := gibbs.Fusion{T: t, H: h, Cp: st.Cp.Value, V: v, VP: st.VP.Value * cubicMetre / pascal}
		if st.Slope.Given {
			fusion.V = gibbs.Clapeyron(fusion, st.Slope.Value/pascal)
		}
		if st.CurveA.Given && st.CurveC.Given {
			fusion.Curve = &gibbs.SimonGlatzel{A: st.CurveA.Value * pascal, C: st.CurveC.Value}
		}
		if pure(m.Composition) {
			return gibbs.Melting(fusion, c.dP), nil
		}
		return gibbs.CompoundMelting(c.liquid, m.Composition, fusion, c.dP)
	}
	from := make([]gibbs.TFunc, len(st.From))
	nu := make([]float64, len(st.From))
	for i, r := range st.From {
		nu[i] = r.Nu
		if r.Solid < 0 {
			continue // a pure liquid component: zero by definition
		}
		g, err := c.standard([2]int{r.Solid, r.Member})
		if err != nil {
			return g, err
		}
		from[i] = g
	}
	if st.Kind == Transition {
		return gibbs.Transition(from[0], t, h, v, c.dP), nil
	}
	return gibbs.Reaction(from, nu, h, st.S.Value, v, c.dP), nil
}

// pure reports that a composition is one component, in any number of moles.
func pure(c [3]float64) bool {
	n := 0
	for _, v := range c {
		if v != 0 {
			n++
		}
	}
	return n == 1
}

func symbolsOf(cs ternary.Components) []string {
	return []string{cs[0].Symbol, cs[1].Symbol, cs[2].Symbol}
}

// mixing turns the file's mixing model into that of the computation.
func mixing(m Mixing, members []string) gibbs.Mixing {
	out := gibbs.Mixing{Sites: m.Sites}
	switch m.Extension {
	case "kohler":
		out.Extension = gibbs.Kohler
	case "toop":
		out.Extension = gibbs.Toop
		out.Odd = slices.Index(members, m.Odd)
	}
	for _, p := range m.Pairs {
		q := gibbs.Pair{I: slices.Index(members, p.Of[0]), J: slices.Index(members, p.Of[1])}
		for _, t := range p.Terms {
			for len(q.L) <= t.Order {
				q.L = append(q.L, gibbs.TFunc{})
			}
			q.L[t.Order] = tfunc(t.A, t.B, t.C)
		}
		out.Pairs = append(out.Pairs, q)
	}
	for _, t := range m.Ternary {
		out.Ternary[slices.Index(members, t.On)] = tfunc(t.A, t.B, t.C)
	}
	return out
}

func tfunc(a, b, c Quantity) gibbs.TFunc {
	return gibbs.TFunc{A: a.Value * joule, B: b.Value, C: c.Value}
}
