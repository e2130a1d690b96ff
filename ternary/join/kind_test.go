package join_test

import (
	"math"
	"slices"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/join"
	"thalweg/ternary/tangent"
)

// blend is an even mixture of phases.
func blend(states []gibbs.State) (b ternary.Composition) {
	for _, s := range states {
		c := s.Composition()
		for i := range b {
			b[i] += c[i] / float64(len(states))
		}
	}
	return b
}

// A reaction goes the way that equilibria go: an even mixture of its high side still
// is that side's phases a little above the level, and one of its low side is those of
// the low side a little below it.
func TestReactionsAgainstEquilibria(t *testing.T) {
	var list []*gibbs.System
	for _, name := range systems.Names() {
		list = append(list, trial.Builtin(t, name))
	}
	for _, c := range trial.Cases() {
		list = append(list, c.System)
	}
	for seed := int64(1); seed <= 8; seed++ {
		list = append(list, trial.System(seed, trial.Options{Unmixing: seed%2 == 0}))
	}
	tested := 0
	kinds := map[string]int{}
	for _, sys := range list {
		for k := range 3 {
			d, err := join.Compute(sys, ternary.Apex(k), ternary.Apex((k+1)%3), join.Options{Count: 20})
			if err != nil || !d.Checks.Passed {
				continue
			}
			for i := range d.Levels {
				l := &d.Levels[i]
				r := l.Reaction(sys)
				kinds[r.Kind]++
				for side, states := range [2][]gibbs.State{r.High, r.Low} {
					b := blend(states)
					if len(states) == 0 || !b.Inside(0) {
						continue
					}
					T := l.T * (1 + [2]float64{1e-5, -1e-5}[side])
					q, err := tangent.Solve(sys, b, T)
					if err != nil {
						t.Error(err)
						continue
					}
					tested++
					for _, p := range q.Parts {
						known := slices.ContainsFunc(states, func(s gibbs.State) bool { return s.Phase == p.State.Phase })
						if !known && p.Mole > 1e-3 {
							t.Errorf("%s, %s at %.4f K: a mixture of side %d holds phase %d at %.4f K", sys.Name, r.Kind, l.T, side, p.State.Phase, T)
						}
					}
				}
			}
		}
	}
	for _, kind := range []string{"eutectic", "peritectic", "monotectic", "transition"} {
		if kinds[kind] == 0 {
			t.Errorf("no %s among %v", kind, kinds)
		}
	}
	if tested < 60 {
		t.Errorf("only %d mixtures tested", tested)
	}
}

// The lines of two binaries by their names.
func TestRoles(t *testing.T) {
	sys := trial.Builtin(t, "di-ab-an")
	d := compute(t, sys, ternary.Apex(1), ternary.Apex(2), join.Options{Count: 20})
	var roles []string
	for i := range d.Lines {
		roles = append(roles, d.Lines[i].Role())
		if comes, goes := d.Lines[i].Change(); len(comes)+len(goes) != 1 {
			t.Errorf("%s: %v come and %v go", roles[i], comes, goes)
		}
	}
	if !slices.Equal(roles, []string{"liquidus", "solidus"}) {
		t.Errorf("the lines of a loop are %v", roles)
	}
	for _, l := range compute(t, loop(15000), ternary.Apex(0), ternary.Apex(1), join.Options{TMin: 500, TMax: 900, Count: 20}).Lines {
		if got := l.Role(); got != "solvus" {
			t.Errorf("the line of a gap in a solid is called %s", got)
		}
	}
}

// Shares by mass from molar masses, by hand: one mole of diopside, 216.550 g, with one
// of anorthite, 278.204 g, is 56.231 % anorthite (masses from the formulas, IUPAC
// standard atomic weights).
func TestShare(t *testing.T) {
	d := &join.Diagram{System: trial.Builtin(t, "di-ab-an"), From: ternary.Apex(0), To: ternary.Apex(2)}
	if got, want := d.Share(0.5, ternary.Mass), 278.204/(216.550+278.204); math.Abs(got-want) > 1e-5 {
		t.Errorf("share by mass %.6f, want %.6f", got, want)
	}
	if d.Share(0.3, ternary.Mole) != 0.3 || d.X(0.3, ternary.Mole) != 0.3 {
		t.Error("the share by mole is not X")
	}
	for _, x := range []float64{0, 0.123, 0.5, 1} {
		if back := d.X(d.Share(x, ternary.Mass), ternary.Mass); math.Abs(back-x) > 1e-15 {
			t.Errorf("%g comes back as %g", x, back)
		}
	}
}
