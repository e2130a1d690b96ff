package section

import (
	"math"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// widenDepth is by how many RT per mole of components every phase is lowered below
// the liquid that stands for the components of the larger triangle, so that it never
// forms.
const widenDepth = 12

// outsider is the symbol of a solid with an end-member outside the triangle.
func outsider(sys *gibbs.System) (symbol string, outside bool) {
	for _, p := range sys.Solids {
		for _, m := range p.Members {
			if m.C[0] < 0 || m.C[1] < 0 || m.C[2] < 0 {
				return p.Symbol, true
			}
		}
	}
	return "", false
}

// widening is a larger triangle, with the contents of a solid outside the first in the
// place of one of its components. There every solid is ordinary; the liquid is a
// solution of three members like any other.
type widening struct {
	old, sys *gibbs.System
	T        float64
	basis    [3][3]float64 // moles of the old components in each new one
}

// widen looks for a larger triangle that holds all phases.
func widen(sys *gibbs.System, T float64) (*widening, bool) {
	for _, p := range sys.Solids {
		for _, m := range p.Members {
			if m.C[0] >= 0 && m.C[1] >= 0 && m.C[2] >= 0 {
				continue
			}
			for r := range 3 {
				if m.C[r] <= 0 {
					continue
				}
				w := &widening{old: sys, T: T}
				for k := range 3 {
					w.basis[k] = ternary.Apex(k)
				}
				w.basis[r] = m.C
				if w.build(r) {
					return w, true
				}
			}
		}
	}
	return nil, false
}

// build makes the system of the larger triangle, in which component r is replaced. It
// reports whether every phase lies in it.
func (w *widening) build(r int) bool {
	into := func(c [3]float64) (out [3]float64, ok bool) {
		v := w.basis[r]
		n := c[r] / v[r]
		for k := range out {
			out[k] = c[k] - n*v[k]
		}
		out[r] = n
		for k := range out {
			if math.Abs(out[k]) < 1e-12 {
				out[k] = 0
			}
			ok = ok || out[k] < 0
		}
		return out, !ok
	}
	depth := widenDepth * ternary.R * w.T
	s := &gibbs.System{Name: w.old.Name, Title: w.old.Title, Components: w.old.Components, Pressure: w.old.Pressure, Range: w.old.Range, Withheld: w.old.Withheld}
	s.Liquid = gibbs.NewLiquid(s.Components, gibbs.Mixing{})
	for _, p := range append([]*gibbs.Phase{w.old.Liquid}, w.old.Solids...) {
		q := &gibbs.Phase{Symbol: p.Symbol, Name: p.Name, Mixing: p.Mixing}
		for _, m := range p.Members {
			c, ok := into(m.C)
			if !ok {
				return false
			}
			m.C = c
			m.G = m.G.Add(gibbs.TFunc{A: -depth * (c[0] + c[1] + c[2])}, 1)
			q.Members = append(q.Members, m)
		}
		s.Solids = append(s.Solids, q.Prepare())
	}
	w.sys = s
	return true
}

// moles are the old components in a composition of the larger triangle.
func (w *widening) moles(x ternary.Composition) (n [3]float64) {
	for j, v := range x {
		for k := range n {
			n[k] += v * w.basis[j][k]
		}
	}
	return n
}

// back is a composition of the larger triangle in the old components.
func (w *widening) back(x ternary.Composition) ternary.Composition {
	n := w.moles(x)
	for k := range n {
		if math.Abs(n[k]) < 1e-14 {
			n[k] = 0
		}
	}
	c, err := ternary.Normalize(n)
	if err != nil {
		return composition(n)
	}
	return c
}

// narrow cuts a section of the larger triangle down to the first.
func (w *widening) narrow(s *Section) *Section {
	out := &Section{System: w.old, T: s.T, Checks: s.Checks}
	out.Checks.OneTwoThree = [3]int{}
	out.Checks.Area = 0
	for i := range s.Regions {
		r := w.region(&s.Regions[i])
		if r == nil {
			continue
		}
		out.Regions = append(out.Regions, *r)
		out.Checks.Area += r.Area()
		out.Checks.OneTwoThree[len(r.Phases)-1]++
	}
	for _, x := range s.Critical {
		if n := w.moles(x); n[0] >= 0 && n[1] >= 0 && n[2] >= 0 {
			out.Critical = append(out.Critical, w.back(x))
		}
	}
	if a := out.Checks.Area; math.Abs(a-1) > areaTol && out.Checks.Passed {
		out.Checks.Problems = append(out.Checks.Problems, "the regions do not tile the triangle")
		out.Checks.Passed = false
	}
	return out
}

// region is the part of a region within the first triangle, nil if there is none.
func (w *widening) region(r *Region) *Region {
	out := &Region{}
	if len(r.Outline) > 2 {
		ring := w.ring(r.Outline)
		if len(ring) < 3 || math.Abs(ringArea(ring)) < 1e-14 {
			return nil
		}
		out.Outline = ring
		for _, h := range r.Holes {
			if ring := w.ring(h); len(ring) > 2 {
				out.Holes = append(out.Holes, ring)
			}
		}
	} else {
		ends, ok := w.line(r.Outline[0], r.Outline[len(r.Outline)-1])
		if !ok {
			return nil
		}
		out.Outline = ends[:]
	}
	for _, p := range r.Phases {
		out.Phases = append(out.Phases, p-1) // the liquid is the first of the solids there
	}
	for _, t := range r.TieLines {
		if ends, ok := w.line(composition(t.A.C), composition(t.B.C)); ok {
			out.TieLines = append(out.TieLines, TieLine{A: w.state(t.A), B: w.state(t.B), Ends: ends})
		}
	}
	for _, c := range r.Corners {
		out.Corners = append(out.Corners, w.state(c))
	}
	out.sideA, out.sideB = w.side(r.sideA), w.side(r.sideB)
	sortPhases(out)
	return out
}

// state is a phase in the old components.
func (w *widening) state(s gibbs.State) gibbs.State {
	s.Phase--
	p := w.old.Liquid
	if s.Phase >= 0 {
		p = w.old.Solids[s.Phase]
	}
	s.C = p.Contents(s.Y)
	return s
}

// side is the course of a phase as far as it lies within the first triangle.
func (w *widening) side(xs []ternary.Composition) (out []ternary.Composition) {
	for _, x := range xs {
		if n := w.moles(x); n[0] >= -1e-12 && n[1] >= -1e-12 && n[2] >= -1e-12 {
			out = append(out, w.back(x))
		}
	}
	return out
}

// ring cuts a ring at the sides of the first triangle.
func (w *widening) ring(ring []ternary.Composition) []ternary.Composition {
	for k := range 3 {
		var out []ternary.Composition
		for i, a := range ring {
			b := ring[(i+1)%len(ring)]
			ha, hb := w.moles(a)[k], w.moles(b)[k]
			if ha >= 0 {
				out = append(out, a)
			}
			if ha >= 0 != (hb >= 0) {
				out = append(out, a.Lerp(b, ha/(ha-hb)))
			}
		}
		if ring = out; len(ring) < 3 {
			return nil
		}
	}
	mapped := make([]ternary.Composition, len(ring))
	for i, x := range ring {
		mapped[i] = w.back(x)
	}
	return dedupe(mapped)
}

// line is the part of a tie line within the first triangle.
func (w *widening) line(a, b ternary.Composition) (ends [2]ternary.Composition, ok bool) {
	u, v := 0.0, 1.0
	ha, hb := w.moles(a), w.moles(b)
	for k := range ha {
		switch {
		case ha[k] < 0 && hb[k] < 0:
			return ends, false
		case ha[k] < 0:
			u = math.Max(u, ha[k]/(ha[k]-hb[k]))
		case hb[k] < 0:
			v = math.Min(v, ha[k]/(ha[k]-hb[k]))
		}
	}
	if u > v {
		return ends, false
	}
	return [2]ternary.Composition{w.back(a.Lerp(b, u)), w.back(a.Lerp(b, v))}, true
}
