package systems

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"thalweg/ternary"
)

// states checks the standard states, which may refer to one another.
func (c *checker) states() {
	c.refs = references(c.f)
	for i := range c.f.Solids {
		s := &c.f.Solids[i]
		w := c.w.Solid[i]
		if len(w.Member) == 0 {
			c.state(fmt.Sprintf("solid[%d]", i), w.wireState, &s.Members[0])
			continue
		}
		for k := range s.Members {
			c.state(fmt.Sprintf("solid[%d].member[%d]", i, k), w.Member[k].wireState, &s.Members[k])
		}
	}
	c.cycles()
}

// references maps every way of naming a member to the members it may mean: its
// symbol, SOLID.MEMBER, and L.COMPONENT for a pure liquid component.
func references(f *File) map[string][]Reactant {
	refs := map[string][]Reactant{}
	for i, s := range f.Solids {
		for k, m := range s.Members {
			r := Reactant{Solid: i, Member: k}
			refs[m.Symbol] = append(refs[m.Symbol], r)
			refs[s.Symbol+"."+m.Symbol] = append(refs[s.Symbol+"."+m.Symbol], r)
		}
	}
	for k, comp := range f.Components {
		name := LiquidSymbol + "." + comp.Symbol
		refs[name] = append(refs[name], Reactant{Solid: -1, Member: k})
	}
	return refs
}

// state checks the one standard state of a member.
func (c *checker) state(path string, w wireState, m *Member) {
	var given []string
	if w.Melting != nil {
		given = append(given, "melting")
		c.melting(path+".melting", w.Melting, m)
	}
	if w.Transition != nil {
		given = append(given, "transition")
		c.transition(path+".transition", w.Transition, m)
	}
	if w.Reaction != nil {
		given = append(given, "reaction")
		c.reaction(path+".reaction", w.Reaction, m)
	}
	switch len(given) {
	case 0:
		c.add(path, orElse(m.Symbol, "this member")+" has no standard state", "add a melting, transition or reaction table")
	case 1:
	default:
		c.add(path+"."+given[1], m.Symbol+" has more than one standard state: "+strings.Join(given, ", "), "keep one")
	}
}

func (c *checker) melting(path string, w *wireMelting, m *Member) {
	h := w.wireH.want()
	h.strictlyPos = true
	h.unitRemedy = "melting takes up heat: give kJ per mole of formula unit"
	m.State = State{
		Kind: Melting,
		T:    c.quantity(path, w.wireT.want(), w.wireSource),
		H:    c.quantity(path, h, w.wireSource),
		Cp:   c.quantity(path, w.wireCp.want(), w.wireSource),
		V:    c.quantity(path, w.wireV.want(), w.wireSource),
	}
	c.underPressure(path, w, m)
	for _, x := range m.Composition {
		if x < 0 {
			c.add(path, m.Symbol+" lies outside the triangle, so there is no liquid of its composition to melt to",
				"use a reaction from solids or liquid components (L.SYMBOL)")
			break
		}
	}
	n := atoms(m.Formula)
	if n == 0 || m.State.T.Value <= absoluteZeroC || m.State.H.Value <= 0 {
		return
	}
	s := m.State.H.Value * 1e3 / (m.State.T.Value + ternary.ZeroCelsius) / n
	if s < minFusionS || s > maxPerAtom {
		c.add(path+".dH_kJ", fmt.Sprintf("an entropy of fusion of %.3g J/(mol K) per atom is not plausible", s), "give kJ per mole of formula unit, and T_C in °C")
	}
	if cp := math.Abs(m.State.Cp.Value) / n; cp > maxPerAtom {
		c.add(path+".dCp_J", fmt.Sprintf("a heat capacity change of %.3g J/(mol K) per atom is not plausible", cp), "give J/(mol K) per mole of formula unit")
	}
}

// underPressure reads what melting does under pressure; its forms exclude each other.
func (c *checker) underPressure(path string, w *wireMelting, m *Member) {
	st := &m.State
	st.VP = c.quantity(path, w.wireVP.want(), w.wireSource)
	st.Slope = c.quantity(path, w.wireSlope.want(), w.wireSource)
	st.CurveA = c.quantity(path, w.wireCurve.wantA(), w.wireSource)
	if w.CurveC != nil || w.CurveA != nil { // their source keys are shared
		st.CurveC = c.quantity(path, w.wireCurve.wantC(), w.wireSource)
	}
	if st.VP.Given && !st.V.Given {
		c.add(path+".dV_change_cm3_per_GPa", "there is no change of volume that this could be a change of", "add dV_cm3")
	}
	if st.CurveA.Given != st.CurveC.Given {
		there := ".simon_a_GPa"
		if st.CurveC.Given {
			there = ".simon_c"
		}
		c.add(path+there, "a melting curve needs both of its numbers", "give simon_a_GPa and simon_c")
	}
	var given []string
	for _, q := range []struct {
		key string
		is  bool
	}{{"dV_cm3", st.V.Given}, {"slope_C_per_GPa", st.Slope.Given}, {"simon_a_GPa", st.CurveA.Given}} {
		if q.is {
			given = append(given, q.key)
		}
	}
	if len(given) > 1 {
		c.add(path+"."+given[1], "what melting does under pressure is said twice: "+strings.Join(given, ", "), "keep one")
	}
}

func (c *checker) transition(path string, w *wireTransition, m *Member) {
	m.State = State{
		Kind: Transition,
		T:    c.quantity(path, w.wireT.want(), w.wireSource),
		H:    c.quantity(path, w.wireH.want(), w.wireSource),
		V:    c.quantity(path, w.wireV.want(), w.wireSource),
	}
	if t := m.State.T; t.Given && t.Value > absoluteZeroC {
		if n := atoms(m.Formula); n > 0 && math.Abs(m.State.H.Value)*1e3/(t.Value+ternary.ZeroCelsius)/n > maxPerAtom {
			c.add(path+".dH_kJ", fmt.Sprintf("%g kJ/mol is not a plausible heat of transition", m.State.H.Value), "give kJ per mole of formula unit")
		}
	}
	base, ok := c.refer(path+".from", w.From)
	if !ok {
		return
	}
	base.Nu = 1
	m.State.From = []Reactant{base}
	if !sameComposition(c.contents(base), m.Composition) {
		c.add(path+".from", fmt.Sprintf("%s is not of the composition of %s", w.From, m.Symbol), "use a reaction")
	}
}

func (c *checker) reaction(path string, w *wireReaction, m *Member) {
	m.State = State{
		Kind: Reaction,
		H:    c.quantity(path, w.wireH.want(), w.wireSource),
		S:    c.quantity(path, w.wireS.want(), w.wireSource),
		V:    c.quantity(path, w.wireV.want(), w.wireSource),
	}
	if len(w.From) == 0 {
		c.add(path+".from", "the reaction has no phases", `add from = [{ phase = "A", nu = 1 }, …]`)
		return
	}
	var sum [3]float64
	all := true
	for i, p := range w.From {
		at := fmt.Sprintf("%s.from[%d]", path, i)
		base, ok := c.refer(at+".phase", p.Phase)
		if p.Nu == nil || !finite(*p.Nu) || *p.Nu == 0 {
			c.add(at+".nu", "nu must be a finite number other than 0", "give the moles of this phase that make one formula unit")
			ok = false
		}
		if !ok {
			all = false
			continue
		}
		base.Nu = *p.Nu
		m.State.From = append(m.State.From, base)
		for k, v := range c.contents(base) {
			sum[k] += base.Nu * v
		}
	}
	if all && !sameComposition(sum, m.Composition) {
		c.add(path+".from", fmt.Sprintf("the reaction does not balance: it makes %.4g moles of the components, %s has %.4g", sum, m.Symbol, m.Composition),
			"correct the numbers nu")
	}
}

// refer resolves the name of a member.
func (c *checker) refer(path, name string) (Reactant, bool) {
	found := c.refs[name]
	switch len(found) {
	case 1:
		found[0].Phase = name
		return found[0], true
	case 0:
		all := make([]string, 0, len(c.refs))
		for k := range c.refs {
			if k != "" && !strings.HasPrefix(k, ".") {
				all = append(all, k)
			}
		}
		sort.Strings(all)
		remedy := known(all)
		if near := nearest(name, all); len(near) > 0 {
			remedy = "did you mean " + strings.Join(near, " or ") + "?"
		}
		c.add(path, fmt.Sprintf("%q is no solid or member of this file", name), remedy)
	default:
		c.add(path, fmt.Sprintf("%q may mean more than one member", name), "write SOLID.MEMBER")
	}
	return Reactant{}, false
}

// contents is the composition of what a reactant stands for.
func (c *checker) contents(r Reactant) [3]float64 {
	if r.Solid < 0 {
		return ternary.Apex(r.Member)
	}
	return c.f.Solids[r.Solid].Members[r.Member].Composition
}

// cycles reports standard states that are counted from themselves.
func (c *checker) cycles() {
	const (
		fresh = iota
		open
		done
	)
	marks := map[[2]int]int{}
	var visit func(at [2]int, trail []string)
	visit = func(at [2]int, trail []string) {
		m := c.f.Solids[at[0]].Members[at[1]]
		trail = append(trail, m.Symbol)
		marks[at] = open
		for _, r := range m.State.From {
			if r.Solid < 0 {
				continue
			}
			next := [2]int{r.Solid, r.Member}
			switch marks[next] {
			case open:
				c.add(c.statePath(at), "the standard states go round in a circle: "+strings.Join(append(trail, r.Phase), " → "),
					"give one of them a melting table")
			case fresh:
				visit(next, trail)
			}
		}
		marks[at] = done
	}
	for i, s := range c.f.Solids {
		for k := range s.Members {
			if marks[[2]int{i, k}] == fresh {
				visit([2]int{i, k}, nil)
			}
		}
	}
}

// statePath is the path of a member's standard state.
func (c *checker) statePath(at [2]int) string {
	path := fmt.Sprintf("solid[%d]", at[0])
	if len(c.w.Solid[at[0]].Member) > 0 {
		path += fmt.Sprintf(".member[%d]", at[1])
	}
	return path + "." + string(c.f.Solids[at[0]].Members[at[1]].State.Kind) + ".from"
}
