package liquidus_test

import (
	"flag"
	"fmt"
	"os"
	"regexp"
	"sort"
	"strings"
	"testing"

	"thalweg/ternary/gibbs"
	"thalweg/ternary/internal/trial"
	"thalweg/ternary/liquidus"
)

var (
	long   = flag.Bool("long", false, "run the long variants of the tests")
	report = flag.String("report", "", "write the seeds that failed, with their problems, to this `file`")
)

// outcome is what became of one random system.
type outcome struct {
	seed     int64
	solids   int
	split    bool // there is a two-liquid field, or liquids that separate in none
	panicked string
	problems []string
	p        *liquidus.Projection
}

// try computes one system and never lets a panic out.
func try(seed int64, sys *gibbs.System, o liquidus.Options) (out outcome) {
	out.seed, out.solids = seed, len(sys.Solids)
	defer func() {
		if r := recover(); r != nil {
			out.panicked = fmt.Sprint(r)
			out.problems = append(out.problems, "panic: "+out.panicked)
		}
	}()
	p, err := liquidus.Compute(sys, o)
	if err != nil {
		out.problems = []string{err.Error()}
		return out
	}
	out.p = p
	out.problems = p.Checks.Problems
	out.split = len(p.Unmixed) > 0
	for i := range p.Fields {
		out.split = out.split || p.Fields[i].TwoLiquids
	}
	if p.Checks.Passed != (len(p.Checks.Problems) == 0) {
		out.problems = append(out.problems, "Passed disagrees with Problems")
	}
	if p.Checks.Passed && p.Checks.Euler != 0 {
		out.problems = append(out.problems, "Passed although Euler's formula fails")
	}
	return out
}

var digits = regexp.MustCompile(`[0-9][0-9.e+−-]*`)

// reason strips a problem of names and numbers, so that like ones count together.
func reason(problem string, sys *gibbs.System) string {
	for _, s := range sys.Solids {
		problem = strings.ReplaceAll(problem, " "+s.Symbol+" ", " S ")
	}
	for _, c := range sys.Components {
		problem = strings.ReplaceAll(problem, c.Symbol, "X")
	}
	return digits.ReplaceAllString(problem, "#")
}

// torture runs n seeds and returns the number complete, and that of systems with
// two liquids somewhere.
func torture(t *testing.T, first int64, n int, o trial.Options) (complete, split int) {
	t.Helper()
	reasons := map[string]int{}
	splitComplete := 0
	var lines []string
	for seed := first; seed < first+int64(n); seed++ {
		sys := trial.System(seed, o)
		out := try(seed, sys, liquidus.Options{})
		if out.panicked != "" {
			t.Errorf("seed %d: panic: %s", seed, out.panicked)
		}
		if out.split {
			split++
		}
		if len(out.problems) == 0 {
			complete++
			if out.split {
				splitComplete++
			}
			continue
		}
		reasons[reason(out.problems[0], sys)]++
		lines = append(lines, fmt.Sprintf("seed %d, %+v, %d solids, two liquids %v:\n    %s", seed, o, out.solids, out.split, strings.Join(out.problems, "\n    ")))
	}
	var keys []string
	for k := range reasons {
		keys = append(keys, k)
	}
	sort.Slice(keys, func(i, j int) bool {
		return reasons[keys[i]] > reasons[keys[j]] || reasons[keys[i]] == reasons[keys[j]] && keys[i] < keys[j]
	})
	summary := fmt.Sprintf("%d systems of seeds %d to %d, %+v: %d complete (%.2f %%); %d with two liquids, %d of them complete",
		n, first, first+int64(n)-1, o, complete, 100*float64(complete)/float64(n), split, splitComplete)
	for _, k := range keys {
		summary += fmt.Sprintf("\n%5d  %s", reasons[k], k)
	}
	t.Log(summary)
	writeReport(t, summary, lines)
	return complete, split
}

func writeReport(t *testing.T, summary string, lines []string) {
	if *report == "" {
		return
	}
	f, err := os.OpenFile(*report, os.O_CREATE|os.O_APPEND|os.O_WRONLY, 0o644)
	if err != nil {
		t.Fatal(err)
	}
	fmt.Fprintf(f, "%s\n\n%s\n\n", summary, strings.Join(lines, "\n"))
	if err := f.Close(); err != nil {
		t.Fatal(err)
	}
}

// tortureShare is the share of random systems that must come out complete.
const tortureShare = 0.97

func TestTorture(t *testing.T) {
	const n = 200
	complete, _ := torture(t, 1, n, trial.Options{})
	if float64(complete) < tortureShare*n {
		t.Errorf("%d of %d projections complete, want %.0f %%", complete, n, 100*tortureShare)
	}
}

// The same with compounds of any entropy: reactions that take up heat.
func TestTortureHarsh(t *testing.T) {
	const n = 100
	complete, _ := torture(t, 1, n, trial.Options{Harsh: true})
	if float64(complete) < tortureShare*n {
		t.Errorf("%d of %d projections complete, want %.0f %%", complete, n, 100*tortureShare)
	}
}

// The same with liquids that separate.
func TestTortureTwoLiquids(t *testing.T) {
	const n = 50
	complete, split := torture(t, 1, n, trial.Options{Unmixing: true})
	if split < n/2 {
		t.Errorf("only %d of %d systems have two liquids", split, n)
	}
	if float64(complete) < tortureShare*n {
		t.Errorf("%d of %d projections complete, want %.0f %%", complete, n, 100*tortureShare)
	}
}

// The same with solid solutions that unmix.
func TestTortureSolvus(t *testing.T) {
	const n = 50
	complete, _ := torture(t, 1, n, trial.Options{Solvus: true})
	if float64(complete) < tortureShare*n {
		t.Errorf("%d of %d projections complete, want %.0f %%", complete, n, 100*tortureShare)
	}
}

func TestTortureLong(t *testing.T) {
	if !*long {
		t.Skip("run with -long")
	}
	for _, v := range []struct {
		n     int
		o     trial.Options
		share float64
	}{
		{2000, trial.Options{MaxSolids: 12}, tortureShare},
		{2000, trial.Options{MaxSolids: 12, Harsh: true}, tortureShare},
		{500, trial.Options{Unmixing: true}, tortureShare},
		{500, trial.Options{Solvus: true}, tortureShare},
		{500, trial.Options{Unmixing: true, Solvus: true}, 0.96}, // gaps in liquid and solid at once
	} {
		complete, _ := torture(t, 1001, v.n, v.o)
		if float64(complete) < v.share*float64(v.n) {
			t.Errorf("%+v: %d of %d projections complete, want %.0f %%", v.o, complete, v.n, 100*v.share)
		}
	}
}

// Isotherms of random systems are whole: none is lost.
func TestTortureIsotherms(t *testing.T) {
	n := 100
	if *long {
		n = 1000
	}
	lost, traced := 0, 0
	var lines []string
	for seed := int64(1); seed <= int64(n); seed++ {
		sys := trial.System(seed, trial.Options{})
		base := try(seed, sys, liquidus.Options{})
		if len(base.problems) > 0 {
			continue
		}
		ts := spread(base.p, 10)
		out := try(seed, sys, liquidus.Options{Isotherms: ts})
		traced += len(ts)
		lost += len(out.problems)
		for _, q := range out.problems {
			lines = append(lines, fmt.Sprintf("seed %d (isotherms spread(p, 10)): %s", seed, q))
		}
		if out.panicked != "" {
			t.Errorf("seed %d: panic: %s", seed, out.panicked)
		}
	}
	summary := fmt.Sprintf("%d isotherms of %d systems: %d problems", traced, n, lost)
	t.Log(summary)
	writeReport(t, summary, lines)
	if float64(lost) > 0.002*float64(traced) {
		t.Errorf("%s:\n%s", summary, strings.Join(lines, "\n"))
	}
}
