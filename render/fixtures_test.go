package render

import (
	"fmt"
	"math"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/liquidus"
)

// An ideal eutectic system of three invented substances, computed here by
// elementary means: Schröder and van Laar's law gives the saturated fraction
// of each, x_i = exp(−ΔH_i/R (1/T − 1/Tm_i)).
type idealSystem struct {
	h, tm [3]float64 // J/mol, K
	sys   *gibbs.System
}

func formula(t testing.TB, s string) ternary.Formula {
	t.Helper()
	f, err := ternary.ParseFormula(s)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func newIdeal(t testing.TB) idealSystem {
	cs := ternary.Components{
		{Symbol: "Ald", Name: "aldonite", Formula: formula(t, "CaMgSi2O6")},
		{Symbol: "Bev", Name: "bevrite", Formula: formula(t, "NaAlSi3O8")},
		{Symbol: "Cov", Name: "covrite", Formula: formula(t, "CaAl2Si2O8")},
	}
	s := idealSystem{h: [3]float64{138e3, 63e3, 133e3}, tm: [3]float64{1668, 1393, 1830}}
	s.sys = &gibbs.System{Name: "invented", Title: "An invented ideal system", Components: cs}
	for i, c := range cs {
		s.sys.Solids = append(s.sys.Solids, &gibbs.Phase{Symbol: c.Symbol, Name: c.Name,
			Members: []gibbs.EndMember{{Symbol: c.Symbol, C: ternary.Apex(i)}}})
	}
	return s
}

// saturated is the fraction of i in a liquid saturated with it.
func (s idealSystem) saturated(i int, t float64) float64 {
	return math.Exp(-s.h[i] / ternary.R * (1/t - 1/s.tm[i]))
}

// eutectic is the temperature at which the saturated fractions of the
// components sum to one.
func (s idealSystem) eutectic(of ...int) float64 {
	lo, hi := 300.0, 2000.0
	for range 100 {
		mid := (lo + hi) / 2
		sum := 0.0
		for _, i := range of {
			sum += math.Min(1, s.saturated(i, mid))
		}
		if sum > 1 {
			hi = mid
		} else {
			lo = mid
		}
	}
	return lo
}

// on is the liquid saturated with i and j at T.
func (s idealSystem) on(i, j int, t float64) ternary.Composition {
	var x ternary.Composition
	x[i], x[j] = s.saturated(i, t), s.saturated(j, t)
	k := 3 - i - j
	x[k] = math.Max(0, 1-x[i]-x[j])
	return x
}

func (s idealSystem) state(i int) gibbs.State {
	return gibbs.State{Phase: i, Y: [3]float64{1}, C: ternary.Apex(i)}
}

// liquidusT is the liquidus temperature and the primary solid at x.
func (s idealSystem) liquidusT(x ternary.Composition) (float64, int) {
	best, which := 0.0, 0
	for i := range 3 {
		if t := s.h[i] / (s.h[i]/s.tm[i] - ternary.R*math.Log(x[i])); t > best {
			best, which = t, i
		}
	}
	return best, which
}

func (s idealSystem) projection(step float64) *liquidus.Projection {
	te := s.eutectic(0, 1, 2)
	p := &liquidus.Projection{System: s.sys, Checks: liquidus.Checks{Passed: true}}
	p.Nodes = append(p.Nodes, liquidus.Node{ID: "E1", Kind: liquidus.Eutectic, Edge: -1, T: te, Liquid: s.on(0, 1, te),
		Solids: []gibbs.State{s.state(0), s.state(1), s.state(2)}, Coefficients: []float64{0.3, 0.3, 0.4}})
	lines := map[[2]int][]ternary.Composition{}
	for n, pair := range [][2]int{{0, 1}, {1, 2}, {0, 2}} {
		i, j := pair[0], pair[1]
		tb := s.eutectic(i, j)
		p.Nodes = append(p.Nodes, liquidus.Node{ID: fmt.Sprintf("e%d", n+1), Kind: liquidus.Eutectic, Edge: 3 - i - j, T: tb,
			Liquid: s.on(i, j, tb), Solids: []gibbs.State{s.state(i), s.state(j)}, Coefficients: []float64{0.5, 0.5}})
		c := liquidus.Curve{Solids: pair, From: n + 1, To: 0}
		for k := 0; k <= 40; k++ {
			t := tb + (te-tb)*float64(k)/40
			c.Points = append(c.Points, liquidus.Point{Liquid: s.on(i, j, t), T: t, Kind: liquidus.Cotectic, Consumed: -1})
			lines[pair] = append(lines[pair], s.on(i, j, t))
		}
		p.Curves = append(p.Curves, c)
	}
	join := func(i, j int) []ternary.Composition {
		if l, ok := lines[[2]int{i, j}]; ok {
			return l
		}
		return lines[[2]int{j, i}]
	}
	for i := range 3 {
		j, k := (i+1)%3, (i+2)%3
		out := []ternary.Composition{ternary.Apex(i)}
		out = append(out, join(i, j)...)
		back := join(i, k)
		for n := len(back) - 2; n >= 0; n-- {
			out = append(out, back[n])
		}
		p.Fields = append(p.Fields, liquidus.Field{Solid: i, Outline: out, Peak: ternary.Apex(i), PeakT: s.tm[i]})
	}
	for t := math.Ceil((te-273.15)/step)*step + 273.15; t < 1830; t += step {
		iso := liquidus.Isotherm{T: t}
		for i := range 3 {
			if line := s.isotherm(i, t); line != nil {
				iso.Lines = append(iso.Lines, liquidus.IsothermLine{Solid: i, Points: line})
			}
		}
		p.Isotherms = append(p.Isotherms, iso)
	}
	return p
}

// isotherm is the line x_i = const on which i is the primary solid.
func (s idealSystem) isotherm(i int, t float64) []ternary.Composition {
	if t >= s.tm[i] {
		return nil
	}
	xi := s.saturated(i, t)
	j, k := (i+1)%3, (i+2)%3
	var out []ternary.Composition
	for n := 0; n <= 200; n++ {
		var x ternary.Composition
		x[i] = xi
		x[j] = (1 - xi) * float64(n) / 200
		x[k] = 1 - xi - x[j]
		if x[j] <= s.saturated(j, t)+1e-9 && x[k] <= s.saturated(k, t)+1e-9 {
			out = append(out, x)
		}
	}
	return out
}

// path is the line of descent of a bulk composition: away from the primary
// solid, along a boundary, to the eutectic. Pure solids do not react, so it
// holds for both modes.
func (s idealSystem) path(b ternary.Composition) *descent.Path {
	t0, i := s.liquidusT(b)
	te := s.eutectic(0, 1, 2)
	p := &descent.Path{System: s.sys, Mode: descent.Equilibrium, Bulk: b, LiquidT: t0, EndT: te, Reason: "the last liquid is gone"}
	add := func(t float64, x ternary.Composition, event string) {
		var c [3]float64
		f := math.Inf(1)
		for k := range 3 {
			f = math.Min(f, b[k]/x[k])
		}
		st := descent.Step{T: t, Event: event, Liquid: x, MeltMole: math.Min(1, f)}
		for k := range 3 {
			if c[k] = b[k] - f*x[k]; c[k] > 1e-9 {
				st.Solids = append(st.Solids, descent.Amount{State: s.state(k), Mole: c[k]})
			}
		}
		m := s.sys.Components.MolarMasses()
		st.MeltMass = st.MeltMole * (x[0]*m[0] + x[1]*m[1] + x[2]*m[2]) / (b[0]*m[0] + b[1]*m[1] + b[2]*m[2])
		p.Steps = append(p.Steps, st)
	}
	add(t0, b, s.sys.Solids[i].Symbol+" in")
	second := -1
	var t float64
	for t = t0 - 1; t > te; t-- {
		if second < 0 {
			xi := s.saturated(i, t)
			x := b
			for k := range 3 {
				if k != i {
					x[k] = b[k] / (1 - b[i]) * (1 - xi)
				}
			}
			x[i] = xi
			for k := range 3 {
				if k != i && x[k] > s.saturated(k, t) {
					second = k
				}
			}
			if second < 0 {
				add(t, x, "")
				continue
			}
			add(t, s.on(i, second, t), s.sys.Solids[second].Symbol+" in")
			continue
		}
		add(t, s.on(i, second, t), "")
	}
	add(te, s.on(0, 1, te), s.sys.Solids[3-i-second].Symbol+" in")
	last := p.Steps[len(p.Steps)-1]
	last.MeltMole, last.MeltMass, last.Event = 0, 0, "liquid used up"
	last.Solids = nil
	for k := range 3 {
		last.Solids = append(last.Solids, descent.Amount{State: s.state(k), Mole: b[k]})
	}
	p.Steps = append(p.Steps, last)
	return p
}

// made keeps what figures has computed; nothing draws into its results.
var made map[string]Figure

// figures are the compositions that all layout tests look at.
func figures(t testing.TB) map[string]Figure {
	t.Helper()
	if made == nil {
		made = makeFigures(t)
	}
	return made
}

func makeFigures(t testing.TB) map[string]Figure {
	s := newIdeal(t)
	b := ternary.Composition{0.3, 0.1, 0.6}
	out := map[string]Figure{
		"ideal": {Projection: s.projection(20), Samples: []Sample{{Name: "A-1", Composition: b}, {Name: "B-7", Composition: ternary.Composition{0.2, 0.5, 0.3}}},
			Paths: []*descent.Path{s.path(b)}},
		"crowded": {Projection: compute(t, crowded(t), 50)},
		"wordy":   wordy(t),
	}
	steps := map[string]float64{"di-an-fo": 20, "di-ab-an": 20}
	for _, name := range systems.Names() {
		file, err := systems.Builtin(name)
		if err != nil {
			t.Fatal(err)
		}
		sys, err := file.AtReference(nil)
		if err != nil {
			t.Fatal(err)
		}
		step := steps[name]
		if step == 0 {
			step = 25
		}
		out[name] = withPath(t, Figure{Projection: compute(t, sys, step)})
	}
	return out
}

// withPath lays an equilibrium path and a fractional one over a figure.
func withPath(t testing.TB, f Figure) Figure {
	sys := f.Projection.System
	for i, amounts := range [][3]float64{{0.3, 0.15, 0.55}, {0.25, 0.5, 0.25}} {
		b, err := sys.Components.Composition(amounts, ternary.Mass)
		if err != nil {
			t.Fatal(err)
		}
		p, err := descent.Follow(sys, b, descent.Options{Mode: []descent.Mode{descent.Equilibrium, descent.Fractional}[i]})
		if err != nil {
			t.Fatal(err)
		}
		f.Paths = append(f.Paths, p)
		f.Samples = append(f.Samples, Sample{Name: []string{"A-1", "B-7"}[i], Composition: b})
	}
	return f
}

// wordy has long names, many samples close together, warnings and remarks.
func wordy(t testing.TB) Figure {
	s := invented{
		symbols:  [3]string{"K-Sil", "CaO·SiO2", "NaCaF3"},
		names:    [3]string{"potassium aluminium disilicate", "calcium silicate hydrate", "sodium calcium trifluoride"},
		formulas: [3]string{"KAlSi2O6", "CaSiO3", "NaCaF3"},
		melt:     [3]float64{1400, 1540, 1250}, heat: [3]float64{40, 57, 50},
		compounds: []compound{{"Xyl", "xylotilite of the second kind", "invented; stands for a phase outside the plane", [3]float64{0.4, 0.3, 0.3}, 1250, 60}},
	}.system(t)
	s.Withheld = []string{"cristobalite", "tridymite", "Wo"}
	p := compute(t, s, 40)
	p.Unmixed = []ternary.Composition{{0.6, 0.2, 0.2}, {0.62, 0.2, 0.18}}
	f := Figure{Projection: p}
	for k := range 9 {
		a := float64(k)
		x, err := ternary.Normalize([3]float64{30 + 11*math.Sin(3*a), 30 + 11*math.Cos(2*a), 30 + a})
		if err != nil {
			t.Fatal(err)
		}
		f.Samples = append(f.Samples, Sample{Name: fmt.Sprintf("VK-%d", 101+k), Composition: x})
	}
	return f
}
