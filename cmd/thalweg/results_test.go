package main

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"thalweg/systems"
	"thalweg/ternary"
	"thalweg/ternary/descent"
	"thalweg/ternary/liquidus"
)

func writeFile(t *testing.T, name, content string) {
	t.Helper()
	if err := os.WriteFile(name, []byte(content), 0o600); err != nil {
		t.Fatal(err)
	}
}

// object runs a command that must succeed and decodes its JSON.
func object(t *testing.T, args ...string) map[string]any {
	t.Helper()
	code, out, errText := run(append(args, "--format", "json", "--quiet")...)
	if code != exitDone || errText != "" {
		t.Fatalf("%q: exit %d: %s", args, code, errText)
	}
	var v map[string]any
	d := json.NewDecoder(strings.NewReader(out))
	if err := d.Decode(&v); err != nil {
		t.Fatal(err)
	}
	if d.More() {
		t.Fatal("there is more than one object")
	}
	return v
}

// at walks into decoded JSON: keys for objects, indices for lists.
func at(t *testing.T, v any, path ...any) any {
	t.Helper()
	for _, p := range path {
		switch p := p.(type) {
		case string:
			m, _ := v.(map[string]any)
			w, ok := m[p]
			if !ok {
				t.Fatalf("%v: there is no key %q", path, p)
			}
			v = w
		case int:
			l, _ := v.([]any)
			if p >= len(l) {
				t.Fatalf("%v: there is no element %d", path, p)
			}
			v = l[p]
		}
	}
	return v
}

// keys checks that an object has these keys.
func keys(t *testing.T, v any, want string) {
	t.Helper()
	for _, k := range strings.Fields(want) {
		at(t, v, k)
	}
}

func amountOf(t *testing.T, v any, path ...any) float64 {
	t.Helper()
	f, ok := at(t, v, path...).(float64)
	if !ok {
		t.Fatalf("%v is not a number", path)
	}
	return f
}

// The keys that programs rely on.
func TestLiquidusJSONKeys(t *testing.T) {
	v := object(t, "liquidus", "di-an-fo")
	keys(t, v, "system basis components invariants curves maxima fields isotherms checks provenance status metastable withheld remarks pressure_GPa")
	keys(t, at(t, v, "invariants", 0), "id kind edge temperature_C liquid solids reaction coefficients")
	keys(t, at(t, v, "curves", 0), "solids from to points")
	keys(t, at(t, v, "curves", 0, "points", 0), "temperature_C liquid kind")
	keys(t, at(t, v, "fields", 0), "solid area_fraction peak")
	keys(t, at(t, v, "isotherms", 0, "lines", 0), "solid closed points")
	keys(t, at(t, v, "checks"), "euler faces vertices edges pieces passed problems")
	keys(t, at(t, v, "provenance"), "program version system_sha256 options")
	keys(t, at(t, v, "invariants", 0, "liquid"), "Di An Fo")
}

func TestDescendJSONKeys(t *testing.T) {
	v := object(t, "descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35")
	keys(t, v, "system basis components bulk mode steps end checks provenance status metastable withheld remarks")
	keys(t, at(t, v, "steps", 0), "temperature_C event liquid melt_fraction_mass solids crystallising heat_J_per_g")
	keys(t, at(t, v, "steps", 5, "solids", 0), "phase fraction_mass composition")
	keys(t, at(t, v, "end"), "temperature_C reason")
	keys(t, at(t, v, "checks"), "mass_balance passed")
}

// What is printed is what was computed, in the other units.
func TestLiquidusJSONAgainstResult(t *testing.T) {
	f, err := systems.Builtin("di-an-fo")
	if err != nil {
		t.Fatal(err)
	}
	sys, err := f.AtReference(nil)
	if err != nil {
		t.Fatal(err)
	}
	p, err := liquidus.Compute(sys, liquidus.Options{})
	if err != nil {
		t.Fatal(err)
	}
	v := object(t, "liquidus", "di-an-fo")
	if got := amountOf(t, v, "checks", "faces"); int(got) != p.Checks.Faces {
		t.Errorf("faces %v, want %d", got, p.Checks.Faces)
	}
	if got := at(t, v, "provenance", "system_sha256"); got != f.SHA256() {
		t.Errorf("hash %v", got)
	}
	byID := map[string]any{}
	for _, n := range at(t, v, "invariants").([]any) {
		byID[at(t, n, "id").(string)] = n
	}
	if len(byID) == 0 || len(byID) != len(p.Nodes) {
		t.Fatalf("%d invariant points for %d nodes", len(byID), len(p.Nodes))
	}
	for _, n := range p.Nodes {
		got := byID[n.ID]
		if T := amountOf(t, got, "temperature_C"); math.Abs(T-(n.T-273.15)) > 1e-5 {
			t.Errorf("%s: %v °C, want %v", n.ID, T, n.T-273.15)
		}
		// wt% by hand: w_i = x_i·M_i / Σ x·M
		sum := 0.0
		for i, c := range sys.Components {
			sum += n.Liquid[i] * c.Formula.MolarMass()
		}
		for i, c := range sys.Components {
			want := 100 * n.Liquid[i] * c.Formula.MolarMass() / sum
			if w := amountOf(t, got, "liquid", c.Symbol); math.Abs(w-want) > 1e-6 {
				t.Errorf("%s: %s %v wt%%, want %v", n.ID, c.Symbol, w, want)
			}
		}
	}
	_, text, _ := run("liquidus", "di-an-fo")
	inCSV := map[string]float64{}
	for _, r := range records(t, "liquidus", "di-an-fo")[1:] {
		if r[0] == "point" {
			inCSV[r[1]], _ = strconv.ParseFloat(r[4], 64)
		}
	}
	for _, n := range p.Nodes {
		if T := strconv.FormatFloat(n.T-273.15, 'f', 1, 64); !strings.Contains(text, T) {
			t.Errorf("%s: %s °C is not in the text", n.ID, T)
		}
		if math.Abs(inCSV[n.ID]-(n.T-273.15)) > 1e-5 {
			t.Errorf("%s: %v °C in the CSV", n.ID, inCSV[n.ID])
		}
	}
	area := 0.0
	for i := range at(t, v, "fields").([]any) {
		area += amountOf(t, v, "fields", i, "area_fraction")
	}
	if math.Abs(area-1) > 0.01 {
		t.Errorf("the fields cover %v of the triangle", area)
	}
}

// Curves end at points that are listed.
func TestLiquidusJSONReferences(t *testing.T) {
	for _, args := range [][]string{{"liquidus", "di-an-fo"}, {"liquidus", "di-an-fo", "--without", "Fo"}, {"liquidus", "lif-naf-kf", "--basis", "mol"}} {
		v := object(t, args...)
		known := map[string]bool{}
		for _, list := range []string{"invariants", "maxima", "other_nodes"} {
			for _, n := range at(t, v, list).([]any) {
				known[at(t, n, "id").(string)] = true
			}
		}
		curves := at(t, v, "curves").([]any)
		if len(curves) == 0 {
			t.Errorf("%q: no curves", args)
		}
		for _, c := range curves {
			for _, end := range []string{"from", "to"} {
				if id := at(t, c, end).(string); !known[id] {
					t.Errorf("%q: a curve ends at %q, which is not listed", args, id)
				}
			}
		}
	}
}

// The molar composition printed in one basis is the other's by hand.
func TestBasis(t *testing.T) {
	mol := object(t, "liquidus", "lif-naf-kf", "--basis", "mol")
	wt := object(t, "liquidus", "lif-naf-kf")
	if at(t, mol, "basis") != "mol" || at(t, wt, "basis") != "wt" {
		t.Error("the basis is not named")
	}
	// IUPAC 2021 abridged: Li 6.94, F 18.998, Na 22.990, K 39.098.
	mass := map[string]float64{"LiF": 6.94 + 18.998, "NaF": 22.990 + 18.998, "KF": 39.098 + 18.998}
	sum := 0.0
	for c, m := range mass {
		sum += m * amountOf(t, mol, "invariants", 0, "liquid", c)
	}
	for c, m := range mass {
		want := 100 * m * amountOf(t, mol, "invariants", 0, "liquid", c) / sum
		if got := amountOf(t, wt, "invariants", 0, "liquid", c); math.Abs(got-want) > 0.005 {
			t.Errorf("%s: %v wt%%, want %v", c, got, want)
		}
	}
}

func TestDescendJSONBalances(t *testing.T) {
	for _, mode := range modes {
		v := object(t, "descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35", "--mode", mode)
		steps := at(t, v, "steps").([]any)
		if len(steps) < 10 {
			t.Fatalf("%s: only %d steps", mode, len(steps))
		}
		last := steps[len(steps)-1]
		if T, end := amountOf(t, last, "temperature_C"), amountOf(t, v, "end", "temperature_C"); math.Abs(T-end) > 1e-6 || T > amountOf(t, v, "liquidus_temperature_C") {
			t.Errorf("%s: the last step is at %v °C, the end at %v", mode, T, end)
		}
		for i, s := range steps {
			for _, c := range []string{"Di", "Ab", "An"} {
				sum := amountOf(t, s, "melt_fraction_mass") * amountOf(t, s, "liquid", c)
				for _, p := range at(t, s, "solids").([]any) {
					sum += amountOf(t, p, "fraction_mass") * amountOf(t, p, "composition", c)
				}
				if want := amountOf(t, v, "bulk", c); math.Abs(sum-want) > 1e-6 {
					t.Errorf("%s, step %d: %s adds up to %v, want %v", mode, i, c, sum, want)
				}
			}
		}
	}
}

func TestSamplesGivePaths(t *testing.T) {
	t.Chdir(t.TempDir())
	writeFile(t, "one.csv", "name,Di,Ab,An\nA,30,35,35\n")
	writeFile(t, "two.csv", "name,Ab,An,Di\nA,35,35,30\nB,0,0,1\n")
	one := object(t, "descend", "di-ab-an", "--samples", "one.csv")
	two := object(t, "descend", "di-ab-an", "--samples", "two.csv")
	bulk := object(t, "descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35")
	if n := len(at(t, one, "paths").([]any)); n != 1 {
		t.Errorf("%d paths", n)
	}
	if n := len(at(t, two, "paths").([]any)); n != 2 {
		t.Errorf("%d paths", n)
	}
	if at(t, two, "paths", 1, "name") != "B" || amountOf(t, two, "paths", 1, "bulk", "Di") != 100 {
		t.Error("the second path is not that of B")
	}
	if a, b := amountOf(t, two, "paths", 0, "end", "temperature_C"), amountOf(t, bulk, "end", "temperature_C"); a != b {
		t.Errorf("the same bulk ends at %v and %v", a, b)
	}
	placed := object(t, "liquidus", "di-ab-an", "--samples", "two.csv")
	a := amountOf(t, placed, "samples", 0, "liquidus_temperature_C")
	if b := amountOf(t, bulk, "liquidus_temperature_C"); math.Abs(a-b) > 1e-4 {
		t.Errorf("liquidus %v, but %v on the path", a, b)
	}
}

// Two runs give the same bytes.
func TestDeterministic(t *testing.T) {
	for _, format := range formats {
		for _, args := range [][]string{{"liquidus", "lif-naf-kf"}, {"descend", "di-an-fo", "--bulk", "Di=50,An=30,Fo=20"}, {"show"}, {"systems"}} {
			args = append(args, "--format", format)
			_, a, _ := run(args...)
			_, b, _ := run(args...)
			if a != b || a == "" {
				t.Errorf("%q differs or is empty", args)
			}
		}
	}
}

// records runs a command that must succeed and reads its CSV.
func records(t *testing.T, args ...string) [][]string {
	t.Helper()
	code, out, errText := run(append(args, "--format", "csv", "--quiet")...)
	if code != exitDone || errText != "" {
		t.Fatalf("%q: exit %d: %s", args, code, errText)
	}
	rows, err := csv.NewReader(strings.NewReader(out)).ReadAll() // every row as long as the first
	if err != nil {
		t.Fatal(err)
	}
	if len(rows) < 2 {
		t.Fatalf("%q: no record", args)
	}
	return rows
}

func TestLiquidusCSV(t *testing.T) {
	rows := records(t, "liquidus", "di-an-fo", "--basis", "mol")
	want := "record,id,kind,solids,temperature_C,Di_mol%,An_mol%,Fo_mol%,reaction,area_fraction,status"
	if got := strings.Join(rows[0], ","); got != want {
		t.Errorf("header %s\nwant   %s", got, want)
	}
	count := map[string]int{}
	for i, r := range rows[1:] {
		count[r[0]]++
		sum := 0.0
		for _, c := range r[5:8] {
			v, err := strconv.ParseFloat(c, 64)
			if err != nil {
				t.Fatal(err)
			}
			sum += v
		}
		if math.Abs(sum-100) > 1e-6 {
			t.Errorf("record %d: the components sum to %v", i+1, sum)
		}
	}
	v := object(t, "liquidus", "di-an-fo")
	if n := len(at(t, v, "invariants").([]any)) + len(at(t, v, "maxima").([]any)) + len(at(t, v, "other_nodes").([]any)); count["point"] != n {
		t.Errorf("%d points, want %d", count["point"], n)
	}
	for _, kind := range []string{"curve", "field", "isotherm"} {
		if count[kind] == 0 {
			t.Errorf("no record of a %s", kind)
		}
	}
}

func TestDescendCSV(t *testing.T) {
	rows := records(t, "descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35")
	want := "sample,mode,temperature_C,event,melt_fraction_mass,liquid_Di_wt%,liquid_Ab_wt%,liquid_An_wt%," +
		"Di_fraction_mass,Di_Di_wt%,Di_Ab_wt%,Di_An_wt%,Pl_fraction_mass,Pl_Di_wt%,Pl_Ab_wt%,Pl_An_wt%," +
		"crystallising,heat_J_per_g,affinity_Di_J_per_mol,affinity_Pl_J_per_mol,status"
	if got := strings.Join(rows[0], ","); got != want {
		t.Errorf("header %s\nwant   %s", got, want)
	}
	v := object(t, "descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35")
	if n := len(at(t, v, "steps").([]any)); len(rows)-1 != n {
		t.Errorf("%d records for %d steps", len(rows)-1, n)
	}
}

func TestShowHoldsEveryNumber(t *testing.T) {
	for _, name := range systems.Names() {
		f, err := systems.Builtin(name)
		if err != nil {
			t.Fatal(err)
		}
		n := len(f.Values())
		if rows := records(t, "show", name); len(rows)-1 != n {
			t.Errorf("%s: %d records for %d numbers", name, len(rows)-1, n)
		}
		if v := object(t, "show", name); len(at(t, v, "values").([]any)) != n {
			t.Errorf("%s: JSON lacks numbers", name)
		}
		_, text, _ := run("show", name)
		for _, v := range f.Values() {
			if !strings.Contains(text, short(v.Value)) {
				t.Errorf("%s: the text lacks %g of %s", name, v.Value, v.Where)
			}
		}
		for _, c := range f.Cautions {
			if !strings.Contains(strings.Join(strings.Fields(text), " "), strings.Join(strings.Fields(c), " ")) {
				t.Errorf("%s: the text lacks the caution %q", name, c)
			}
		}
	}
	if v := object(t, "systems"); len(at(t, v, "systems").([]any)) != len(systems.Names()) {
		t.Error("systems does not list all")
	}
}

// JSON has no infinities: they become null.
func TestNumberJSON(t *testing.T) {
	b, err := toJSON(map[string]any{"a": amounts{{"x", number(math.NaN())}, {"y", number(math.Inf(-1))}, {"z", 0.1 + 0.2}}})
	if err != nil {
		t.Fatal(err)
	}
	var compact bytes.Buffer
	if err := json.Compact(&compact, b); err != nil || compact.String() != `{"a":{"x":null,"y":null,"z":0.3}}` {
		t.Errorf("%s, %v", compact.String(), err)
	}
}

func TestFixed(t *testing.T) {
	for _, tt := range []struct {
		v        float64
		decimals int
		want     string
	}{{-0.04, 1, "0.0"}, {0.05, 2, "0.05"}, {-1.25, 1, "-1.2"}, {math.NaN(), 1, "–"}, {math.Inf(1), 1, "–"}} {
		if got := fixed(tt.v, tt.decimals); got != tt.want {
			t.Errorf("fixed(%v, %d) = %q, want %q", tt.v, tt.decimals, got, tt.want)
		}
	}
}

// A bulk in either basis, by hand.
func TestParseBulk(t *testing.T) {
	f, err := systems.Builtin("lif-naf-kf")
	if err != nil {
		t.Fatal(err)
	}
	x, sum, err := parseBulk("--bulk", " NaF = 2 , KF=6", f.Components, ternary.Mole)
	if err != nil || sum != 8 || x != (ternary.Composition{0, 0.25, 0.75}) {
		t.Errorf("mol: %v, %v, %v", x, sum, err)
	}
	// 41.988 g of NaF and 58.096 g of KF are a mole each (IUPAC 2021 abridged).
	x, _, err = parseBulk("--bulk", "NaF=41.988,KF=58.096", f.Components, ternary.Mass)
	if err != nil || math.Abs(x[1]-0.5) > 1e-5 || x[0] != 0 {
		t.Errorf("wt: %v, %v", x, err)
	}
}

func TestShownSteps(t *testing.T) {
	p := &descent.Path{}
	for i := 0; i <= 40; i++ {
		p.Steps = append(p.Steps, descent.Step{MeltMass: 1 - float64(i)/40})
	}
	p.Steps[6].Event = "Pl in"
	want := []int{0, 4, 6, 8, 12, 16, 20, 24, 28, 32, 36, 40}
	got := shownSteps(p)
	if len(got) != len(want) {
		t.Fatalf("got %v, want %v", got, want)
	}
	for i := range want {
		if got[i] != want[i] {
			t.Errorf("got %v, want %v", got, want)
			break
		}
	}
}
