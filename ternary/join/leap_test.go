package join_test

import (
	"math"
	"slices"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/join"
	"thalweg/ternary/liquidus"
)

// On a monotectic the liquid that A is with is another one below than above: the
// horizontal runs on to pure A, and parts two fields of the same phases.
func TestMonotectic(t *testing.T) {
	sys := trial.CaseNamed("two liquids")
	d := compute(t, sys, ternary.Apex(0), ternary.Apex(1), join.Options{Count: 60})
	i := slices.IndexFunc(d.Levels, func(l join.Level) bool { return l.Reaction(sys).Kind == "monotectic" })
	if i < 0 {
		t.Fatalf("no monotectic among %d levels", len(d.Levels))
	}
	l := &d.Levels[i]
	var liquids []float64
	for _, s := range l.States {
		if s.Phase == gibbs.Liquid {
			x, _ := d.Along(s.Composition())
			liquids = append(liquids, x)
		}
	}
	if len(liquids) != 2 {
		t.Fatalf("%d liquids", len(liquids))
	}
	poor, rich := min(liquids[0], liquids[1]), max(liquids[0], liquids[1])
	if l.From != 0 || math.Abs(l.To-rich) > 1e-9 {
		t.Errorf("the level runs from %.10f to %.10f, by the phases from 0 to %.10f", l.From, l.To, rich)
	}
	// regular solution, closed form: both liquids lie at one distance from the middle,
	// and A freezes from the poorer one where RT ln(a) = −ΔG of fusion
	if math.Abs(poor+rich-1) > 1e-9 {
		t.Errorf("liquids at %.10f and %.10f are not symmetric", poor, rich)
	}
	lnA := math.Log(1-poor) + trial.TwoLiquidsL/(ternary.R*l.T)*poor*poor
	if want := -30000 / ternary.R * (1/l.T - 1/1500.0); math.Abs(lnA-want) > 1e-9 {
		t.Errorf("ln of the activity of A is %.10f, at saturation %.10f", lnA, want)
	}
	surf, err := liquidus.NewSurface(sys)
	if err != nil {
		t.Fatal(err)
	}
	if T, _ := surf.Liquidus(d.At(poor)); math.Abs(T-l.T) > 1e-6 {
		t.Errorf("the level lies at %.7f K, the liquidus of its liquid at %.7f K", l.T, T)
	}
	with := 0
	for _, f := range d.Fields {
		if slices.Equal(f.Phases, []int{gibbs.Liquid, 0}) {
			with++
		}
	}
	if with != 2 {
		t.Errorf("%d fields of liquid with A, want one above the level and one below", with)
	}
	for _, line := range d.Lines {
		if line.Role() != "level" && slices.Equal(line.Above, line.Below) {
			t.Errorf("a line that is no level parts two fields of %v", line.Above)
		}
	}
}
