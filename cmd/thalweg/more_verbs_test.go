package main

import (
	"math"
	"strings"
	"testing"
)

func TestMeltJSON(t *testing.T) {
	v := object(t, "melt", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35", "--mode", "fractional")
	keys(t, v, "system basis bulk mode solidus_temperature_C liquidus_temperature_C steps end checks provenance")
	keys(t, at(t, v, "steps", 0), "temperature_C event liquid pool melt_fraction_mass solids in_contact crystallising heat_J_per_g")
	steps := at(t, v, "steps").([]any)
	last := len(steps) - 1
	if first := amountOf(t, v, "steps", 0, "temperature_C"); first != amountOf(t, v, "solidus_temperature_C") {
		t.Errorf("the first row stands at %g °C, not at the solidus", first)
	}
	// in the end all melt together is the bulk
	for c, want := range map[string]float64{"Di": 30, "Ab": 35, "An": 35} {
		if got := amountOf(t, v, "steps", last, "pool", c); math.Abs(got-want) > 1e-8 {
			t.Errorf("in the end all melt holds %.9f %s, the bulk %g", got, c, want)
		}
	}
	// batch melting and equilibrium crystallisation have the same ends
	up := object(t, "melt", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35")
	down := object(t, "descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35")
	if a, b := amountOf(t, up, "solidus_temperature_C"), amountOf(t, down, "end", "temperature_C"); math.Abs(a-b) > 1e-6 {
		t.Errorf("solidus %.8f °C, end of crystallisation %.8f °C", a, b)
	}
}

func TestRetainAndRemove(t *testing.T) {
	end := func(args ...string) float64 {
		return amountOf(t, object(t, append([]string{"descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35"}, args...)...), "end", "temperature_C")
	}
	eq, half, none := end(), end("--mode", "fractional", "--retain", "0.5"), end("--mode", "fractional")
	if !(eq > half && half > none) {
		t.Errorf("ends at %g with all kept, %g with half, %g with nothing", eq, half, none)
	}
	if cut := end("--remove", "1250:Pl=0.5", "--remove", "1200"); !(cut < eq) {
		t.Errorf("with solids removed it ends at %g, at equilibrium %g", cut, eq)
	}
	v := object(t, "descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35", "--remove", "1250:Pl,Di=0.5")
	if got := at(t, v, "provenance", "options", "removals", 0); got != "0.5 of Pl, Di removed at 1250 °C" {
		t.Errorf("removal: %v", got)
	}
}

// The lever rule by hand on what the section says: amounts times compositions add
// up to the sample.
func TestSectionJSON(t *testing.T) {
	v := object(t, "section", "di-ab-an", "--at", "1300,1200", "--bulk", "Di=30,Ab=35,An=35")
	keys(t, v, "system basis components sections provenance status metastable")
	keys(t, at(t, v, "sections", 1), "temperature_C regions critical samples checks")
	keys(t, at(t, v, "sections", 1, "regions", 0), "phases area_fraction outline holes tie_lines corners")
	for i := range 2 {
		sum := map[string]float64{}
		total := 0.0
		for _, p := range at(t, v, "sections", i, "samples", 0, "phases").([]any) {
			f := amountOf(t, p, "fraction_mass")
			total += f
			for _, c := range []string{"Di", "Ab", "An"} {
				sum[c] += f * amountOf(t, p, "composition", c)
			}
		}
		if math.Abs(total-1) > 1e-9 || math.Abs(sum["Di"]-30) > 1e-7 || math.Abs(sum["Ab"]-35) > 1e-7 {
			t.Errorf("section %d: masses sum to %.10f, contents %v", i, total, sum)
		}
		area := 0.0
		for _, g := range at(t, v, "sections", i, "regions").([]any) {
			area += amountOf(t, g, "area_fraction")
		}
		if math.Abs(area-1) > 1e-3 { // curved in wt% between points that are even in mol%
			t.Errorf("section %d: the regions cover %.6f of the triangle", i, area)
		}
	}
}

// At its saturation temperature a solid has no driving force and no undercooling.
func TestAffinityJSON(t *testing.T) {
	v := object(t, "affinity", "di-an-fo", "--liquid", "Di=50,An=35,Fo=15", "--at", "1250")
	keys(t, v, "system liquid temperature_C liquidus_temperature_C primary stable_against_a_second_liquid solids same_contents")
	solids := at(t, v, "solids").([]any)
	if len(solids) != 3 || at(t, v, "solids", 0, "phase") != "Fo" || at(t, v, "primary") != "Fo" {
		t.Errorf("the first of the solids is %v", solids[0])
	}
	T := amountOf(t, v, "solids", 0, "saturated_at_C")
	if math.Abs(T-amountOf(t, v, "liquidus_temperature_C")) > 1e-9 {
		t.Errorf("Fo saturates at %g, the liquidus lies at %g °C", T, amountOf(t, v, "liquidus_temperature_C"))
	}
	if u := amountOf(t, v, "solids", 0, "undercooling_K"); math.Abs(u-(T-1250)) > 1e-6 {
		t.Errorf("undercooling %g K", u)
	}
	w := object(t, "affinity", "di-an-fo", "--liquid", "Di=50,An=35,Fo=15", "--at", exact(T))
	if d := amountOf(t, w, "solids", 0, "affinity_J_per_mol"); math.Abs(d) > 1e-3 {
		t.Errorf("at its saturation temperature Fo has a driving force of %g J/mol", d)
	}
}

// Text and CSV of the verbs hold what JSON holds; figures are written.
func TestMoreVerbsPrint(t *testing.T) {
	t.Chdir(t.TempDir())
	for _, args := range [][]string{
		{"melt", "di-an-fo", "--bulk", "Di=30,An=20,Fo=50", "--mode", "fractional"},
		{"section", "di-an-fo", "--at", "1300", "--bulk", "Di=30,An=20,Fo=50"},
		{"affinity", "di-an-fo", "--liquid", "Di=30,An=20,Fo=50", "--at", "1300"},
		{"pressure", "di-an-fo", "--to", "0.5", "--count", "3"},
	} {
		for _, format := range formats {
			code, out, errText := run(append(args, "--format", format, "--quiet")...)
			if code != exitDone || errText != "" || !strings.Contains(out, "Fo") {
				t.Errorf("%v --format %s: exit %d: %s", args, format, code, errText)
			}
		}
	}
}

// The series of the verb agrees with single projections at the same pressures.
func TestPressureJSON(t *testing.T) {
	v := object(t, "pressure", "di-an-fo", "--to", "0.4", "--count", "5")
	keys(t, v, "system pressures_GPa points changes problems provenance status")
	if n := len(at(t, v, "pressures_GPa").([]any)); n != 5 {
		t.Fatalf("%d pressures", n)
	}
	single := object(t, "liquidus", "di-an-fo", "--pressure", "0.4")
	want := amountOf(t, single, "invariants", 0, "temperature_C")
	if got := amountOf(t, v, "points", 0, "at", 4, "temperature_C"); math.Abs(got-want) > 1e-6 || at(t, v, "points", 0, "at", 4, "kind") != at(t, single, "invariants", 0, "kind") {
		t.Errorf("%.8f °C in the series, %.8f alone", got, want)
	}
}
