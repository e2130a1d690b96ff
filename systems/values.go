package systems

import "fmt"

// Value is one number of a system file with where it stands and where it comes
// from: a row of the table that answers "says who?".
type Value struct {
	Where    string // "Pl, member An, melting" or "liquid, Di–An, order 0"
	Name     string // "heat of fusion"
	Symbol   string // "ΔH"
	Quantity        // number, unit, uncertainty and provenance
}

// Values lists every number of the file that is not arithmetic, in the order of
// the file: the liquid's mixing terms, then solid by solid the standard states
// and mixing terms.
func (f *File) Values() []Value {
	out := f.Liquid.values("liquid", nil)
	for _, s := range f.Solids {
		for _, m := range s.Members {
			where := s.Symbol
			if len(s.Members) > 1 || m.Symbol != s.Symbol {
				where += ", member " + m.Symbol
			}
			out = m.State.values(where, out)
		}
		out = s.Mixing.values(s.Symbol, out)
	}
	return out
}

// stateNames are the names of T, H, S, Cp and V in each kind of standard state.
var stateNames = map[StateKind][5]string{
	Melting:    {"melting point", "heat of fusion", "", "heat capacity change on melting", "volume change on melting"},
	Transition: {"transition temperature", "heat of transition", "", "", "volume change of transition"},
	Reaction:   {"", "heat of reaction", "entropy of reaction", "", "volume change of reaction"},
}

func (st *State) values(where string, out []Value) []Value {
	where += ", " + string(st.Kind)
	names := stateNames[st.Kind]
	symbols := [5]string{"T", "ΔH", "ΔS", "ΔCp", "ΔV"}
	for i, q := range []Quantity{st.T, st.H, st.S, st.Cp, st.V} {
		if q.Given {
			out = append(out, Value{where, names[i], symbols[i], q})
		}
	}
	for _, q := range []Value{
		{where, "change of that with pressure", "dΔV/dP", st.VP},
		{where, "slope of the melting curve", "dT/dP", st.Slope},
		{where, "melting curve of Simon and Glatzel", "a", st.CurveA},
		{where, "melting curve of Simon and Glatzel", "c", st.CurveC},
	} {
		if q.Given {
			out = append(out, q)
		}
	}
	return out
}

func (m *Mixing) values(phase string, out []Value) []Value {
	for _, p := range m.Pairs {
		for _, t := range p.Terms {
			where := fmt.Sprintf("%s, %s–%s, order %d", phase, p.Of[0], p.Of[1], t.Order)
			out = coefficientValues(where, t.A, t.B, t.C, out)
		}
	}
	for _, t := range m.Ternary {
		out = coefficientValues(fmt.Sprintf("%s, ternary term on %s", phase, t.On), t.A, t.B, t.C, out)
	}
	return out
}

func coefficientValues(where string, a, b, c Quantity, out []Value) []Value {
	names := [3]string{"mixing term", "mixing term times T", "mixing term times T ln T"}
	for i, q := range []Quantity{a, b, c} {
		if q.Given {
			out = append(out, Value{where, names[i], [3]string{"a", "b", "c"}[i], q})
		}
	}
	return out
}
