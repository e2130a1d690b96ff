package trial

import (
	"fmt"
	"math/rand"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
)

// Options bound the random systems. The zero value is the documented default.
type Options struct {
	MaxSolids   int  // 0 means 8; at least 3
	Ideal       bool // no excess terms in liquid and solids
	Harsh       bool // entropies of compounds drawn freely, stronger attraction: reactions that take up heat
	NoSolutions bool // stoichiometric solids only
	Unmixing    bool // two components repel each other so much that most liquids separate
	Solvus      bool // there is a solid solution, and its members repel each other so much that it unmixes
}

// Ranges of the invented data.
const (
	tmLow, tmHigh = 700.0, 2200.0 // K, melting points of the components
	dsLow, dsHigh = 8.0, 40.0     // J/(mol K), entropies of fusion per formula unit
	dsShare       = 0.25          // a compound's entropy of fusion differs by this share from its components' sum
	dsHarshHigh   = 25.0          // J/(mol K) per mole of components, when it is drawn freely
	cpShare       = 0.3           // largest ΔCp as a share of the entropy of fusion
)

// formulas lend the apexes their molar masses: 26 to 245 g/mol.
var formulas = []string{"LiF", "NaF", "KF", "NaCl", "KCl", "MgO", "CaO", "SiO2", "CaF2", "BaF2", "PbO", "KBr", "CaMgSi2O6", "NaAlSi3O8", "Mg2SiO4"}

// draw is the making of one system.
type draw struct {
	*rand.Rand
	o      Options
	liquid *gibbs.Phase
	rt     float64            // J/mol, scale of the interaction terms
	dS     [3]float64         // J/(mol K), entropies of fusion of the components
	pure   [3]gibbs.EndMember // the solids of the components
	solids []*gibbs.Phase
}

// System draws a system: three or more solids that cover the whole triangle
// (the pure components, or solid solutions of them), compounds on the edges and
// inside, now and then two forms of one substance; a liquid with
// Redlich–Kister terms of order 0 to 2, linear in T, under any of the three
// extensions, and ternary terms. Attraction may be strong; repulsion stays
// below what would unmix the liquid at its freezing temperature at most seeds,
// unless Options.Unmixing asks for it.
func System(seed int64, o Options) *gibbs.System {
	if o.MaxSolids == 0 {
		o.MaxSolids = 8
	}
	d := &draw{Rand: rand.New(rand.NewSource(seed)), o: o}
	order := d.Perm(len(formulas))
	cs := components([3]string{formulas[order[0]], formulas[order[1]], formulas[order[2]]})
	var tm [3]float64
	for i := range tm {
		tm[i] = d.between(tmLow, tmHigh)
		d.dS[i] = d.between(dsLow, dsHigh)
	}
	d.rt = ternary.R * 0.75 * (tm[0] + tm[1] + tm[2]) / 3
	d.liquid = gibbs.NewLiquid(cs, d.liquidMixing())
	for i := range tm {
		d.pure[i] = gibbs.EndMember{Symbol: cs[i].Symbol, Formula: cs[i].Formula, C: ternary.Apex(i),
			G: gibbs.Melting(d.fusion(tm[i], d.dS[i]), 0)}
	}
	n := 3 + d.Intn(o.MaxSolids-2)
	d.components()
	for try := 0; len(d.solids) < n && try < 40; try++ {
		switch r := d.Float64(); {
		case r < 0.15:
			d.polymorph()
		default:
			d.compound()
		}
	}
	return newSystem(fmt.Sprintf("seed %d", seed), cs, d.liquid, d.solids...)
}

func (d *draw) between(a, b float64) float64 { return a + (b-a)*d.Float64() }
func (d *draw) chance(p float64) bool        { return d.Float64() < p }

// fusion has the given melting point and entropy, sometimes with a ΔCp.
func (d *draw) fusion(T, dS float64) gibbs.Fusion {
	f := gibbs.Fusion{T: T, H: dS * T}
	if d.chance(0.4) {
		f.Cp = d.between(0, cpShare) * dS
	}
	return f
}

// liquidMixing draws the excess terms of the liquid.
func (d *draw) liquidMixing() (m gibbs.Mixing) {
	if d.o.Ideal {
		return m
	}
	m.Extension = gibbs.Extension(d.Intn(3))
	m.Odd = d.Intn(3)
	for _, p := range [3][2]int{{0, 1}, {0, 2}, {1, 2}} {
		if d.chance(0.2) {
			continue
		}
		if d.chance(0.3) {
			p[0], p[1] = p[1], p[0]
		}
		low := -2.5
		if d.o.Harsh {
			low = -4
		}
		high := 2.2
		if d.o.Unmixing && len(m.Pairs) == 0 {
			low, high = 2.6, 4.5
		}
		l := []gibbs.TFunc{d.term(low, high)}
		if d.chance(0.6) {
			l = append(l, d.term(-0.5, 0.5))
		}
		if len(l) == 2 && d.chance(0.4) {
			l = append(l, d.term(-0.3, 0.3))
		}
		m.Pairs = append(m.Pairs, gibbs.Pair{I: p[0], J: p[1], L: l})
	}
	if d.chance(0.3) {
		for k := range m.Ternary {
			m.Ternary[k] = d.term(-2, 1)
		}
	}
	return m
}

// term is an interaction between lo and hi, in RT, at times with a slope that
// turns a tenth of RT into entropy.
func (d *draw) term(lo, hi float64) gibbs.TFunc {
	f := gibbs.TFunc{A: d.between(lo, hi) * d.rt}
	if d.chance(0.4) {
		b := d.between(-0.1, 0.1) * ternary.R
		f.A -= b * d.rt / ternary.R
		f.B = b
	}
	return f
}

// components adds the solids that stand for the pure components.
func (d *draw) components() {
	r := d.Float64()
	if d.o.Solvus {
		r = 0.65 + 0.35*r
	}
	switch {
	case d.o.NoSolutions || r < 0.65:
		for _, e := range d.pure {
			d.solids = append(d.solids, stoichiometric(e.Symbol, e.C, e.G))
		}
	case r < 0.93:
		i := d.Intn(3)
		j, k := (i+1)%3, (i+2)%3
		d.solids = append(d.solids,
			stoichiometric(d.pure[i].Symbol, d.pure[i].C, d.pure[i].G),
			solution("ss", d.solidMixing(2), d.pure[j], d.pure[k]))
	default:
		d.solids = append(d.solids, solution("ss", d.solidMixing(3), d.pure[:]...))
	}
}

// solidMixing is ideal or mildly non-ideal.
func (d *draw) solidMixing(members int) (m gibbs.Mixing) {
	if d.chance(0.3) {
		m.Sites = 2
	}
	if d.o.Solvus {
		// 2 RT per site is critical; rt belongs to the melting points, so that the
		// gap reaches up to the liquidus at some seeds and stays below at others
		m.Pairs = append(m.Pairs, gibbs.Pair{I: 0, J: 1, L: []gibbs.TFunc{d.term(1.2*sites(m), 2.6*sites(m)), d.term(-0.4, 0.4)}})
		return m
	}
	if d.o.Ideal || d.chance(0.5) {
		return m
	}
	for i := 0; i < members; i++ {
		for j := i + 1; j < members; j++ {
			m.Pairs = append(m.Pairs, gibbs.Pair{I: i, J: j, L: []gibbs.TFunc{d.term(-1, 0.9)}})
		}
	}
	return m
}

func sites(m gibbs.Mixing) float64 { return max(1, m.Sites) }

// compound adds a compound of small whole numbers that melts between well below
// and well above the liquidus of what is there without it: stable congruently,
// incongruently or not at all.
func (d *draw) compound() {
	var c [3]float64
	n := 2
	if d.chance(0.35) {
		n = 3
	}
	for _, i := range d.Perm(3)[:n] {
		c[i] = float64(1 + d.Intn(3))
	}
	for _, p := range d.solids {
		if len(p.Members) == 1 && crossNorm(p.Members[0].C, c) < 1e-9 {
			return // the same composition: forms of one substance come from polymorph
		}
	}
	sum := c[0] + c[1] + c[2]
	x := ternary.Composition{c[0] / sum, c[1] / sum, c[2] / sum}
	T := 0.0
	for _, e := range d.pure {
		T = max(T, freezing(d.liquid, x, e.C, e.G))
	}
	T *= 1 + d.between(-0.1, 0.25)
	dS := (c[0]*d.dS[0] + c[1]*d.dS[1] + c[2]*d.dS[2]) * d.between(1-dsShare, 1+dsShare)
	if d.o.Harsh {
		dS = sum * d.between(dsLow, dsHarshHigh)
	}
	f := d.fusion(T, dS)
	d.solids = append(d.solids, compound(fmt.Sprintf("k%d", len(d.solids)), d.liquid, c, f))
}

// polymorph adds a low form of a stoichiometric solid that is there.
func (d *draw) polymorph() {
	p := d.solids[d.Intn(len(d.solids))]
	if !p.Stoichiometric() {
		return
	}
	c := p.Members[0].C
	sum := c[0] + c[1] + c[2]
	T := freezing(d.liquid, ternary.Composition{c[0] / sum, c[1] / sum, c[2] / sum}, c, p.Members[0].G)
	if T == 0 {
		return
	}
	T *= d.between(0.6, 0.97)
	g := gibbs.Transition(p.Members[0].G, T, -sum*d.between(0.5, 6)*T, 0, 0)
	d.solids = append(d.solids, stoichiometric(fmt.Sprintf("%s-low%d", p.Symbol, len(d.solids)), c, g))
}

func crossNorm(a, b [3]float64) float64 {
	u := a[1]*b[2] - a[2]*b[1]
	v := a[2]*b[0] - a[0]*b[2]
	w := a[0]*b[1] - a[1]*b[0]
	return u*u + v*v + w*w
}
