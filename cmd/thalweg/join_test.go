package main

import (
	"bytes"
	"math"
	"strings"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/gibbs"
	"thalweg/ternary/join"
)

// Diopside–anorthite: one eutectic, at what the system was fitted to.
func TestJoinJSON(t *testing.T) {
	v := object(t, "join", "di-ab-an", "--from", "Di=100", "--to", "An=100", "--count", "40")
	keys(t, v, "system status basis components from to place_unit diagram_range_C fields lines levels nodes readings checks provenance metastable")
	keys(t, at(t, v, "lines", 0), "role above below comes goes level points")
	keys(t, at(t, v, "levels", 0), "temperature_C kind from to high low")
	if n := len(at(t, v, "fields").([]any)); n != 4 {
		t.Errorf("%d fields, want 4", n)
	}
	if kind := at(t, v, "levels", 0, "kind"); kind != "eutectic" {
		t.Errorf("the level is called %v", kind)
	}
	if T := amountOf(t, v, "levels", 0, "temperature_C"); math.Abs(T-1274) > 0.5 {
		t.Errorf("eutectic at %.2f °C", T)
	}
	if x := amountOf(t, v, "levels", 0, "high", 0, "place"); math.Abs(x-42) > 0.3 {
		t.Errorf("eutectic liquid at %.2f wt%% An", x)
	}
	if at(t, v, "checks", "passed") != true || amountOf(t, v, "checks", "tested") < 200 {
		t.Errorf("checks: %v", at(t, v, "checks"))
	}
}

// The lever rule by hand, by mass and by mole, on what a reading says.
func TestJoinReading(t *testing.T) {
	v := object(t, "join", "di-ab-an", "--from", "Ab=100", "--to", "An=100", "--count", "20", "--read", "An=50@1400", "--read", "Ab=60,An=40@1300")
	for i, bulk := range []float64{50, 40} {
		liquid := amountOf(t, v, "readings", i, "phases", 0, "composition", "An")
		solid := amountOf(t, v, "readings", i, "phases", 1, "composition", "An")
		share := (solid - bulk) / (solid - liquid)
		if got := amountOf(t, v, "readings", i, "phases", 0, "fraction_mass"); math.Abs(got-share) > 1e-8 {
			t.Errorf("reading %d: %.10f of liquid, by the lever rule %.10f", i, got, share)
		}
		// by mole: shares of mass over the mean molar masses of the phases
		ab, an := 262.223, 278.204
		moles := func(p float64) float64 { return p/an + (100-p)/ab }
		want := share * moles(liquid) / (share*moles(liquid) + (1-share)*moles(solid))
		if got := amountOf(t, v, "readings", i, "phases", 0, "fraction_mole"); math.Abs(got-want) > 1e-5 {
			t.Errorf("reading %d: %.7f of liquid by mole, by hand %.7f", i, got, want)
		}
	}
}

func TestJoinRefusals(t *testing.T) {
	t.Chdir(t.TempDir())
	ends := []string{"join", "di-ab-an", "--from", "Di=100", "--to", "An=100"}
	for _, c := range []struct {
		args []string
		want string
	}{
		{[]string{"join", "di-ab-an", "--from", "Di=100"}, "two ends"},
		{[]string{"join", "di-ab-an", "--from", "Di=100", "--to", "Di=50"}, "one composition"},
		{[]string{"join", "di-ab-an", "--from", "Di=100", "--to", "Fo=50"}, "Fo is not a component"},
		{append(ends, "--count", "1"), "--count"},
		{append(ends, "--range", "1600,1100"), "the lower first"},
		{append(ends, "--range", "warm,1100"), "not a temperature"},
		{append(ends, "--read", "An=40"), "no temperature"},
		{append(ends, "--read", "An=40@hot"), "not a temperature"},
		{append(ends, "--read", "Ab=40@1300"), "same share of Ab"},
		{append(ends, "--read", "An=140@1300"), "beyond the ends"},
		{append(ends, "--read", "Di=40,Ab=30,An=30@1300"), "does not lie on the join"},
		{append(ends, "--figure", "a.doc"), "no format"},
	} {
		code, out, errText := run(c.args...)
		if code != exitUsage || out != "" || !strings.Contains(errText, c.want) {
			t.Errorf("%v: exit %d, %q", c.args, code, errText)
		}
	}
}

// A diagram that fails its own checks says so in every form, and exits 1.
func TestIncompleteJoin(t *testing.T) {
	for _, format := range formats {
		var out, errText bytes.Buffer
		e := newEnv(&out, &errText)
		whole := e.join
		e.join = func(sys *gibbs.System, from, to ternary.Composition, o join.Options) (*join.Diagram, error) {
			d, err := whole(sys, from, to, o)
			if d != nil {
				d.Checks.Passed, d.Checks.Problems = false, []string{"a field is missing"}
			}
			return d, err
		}
		code := execute(NewCmdRoot(e), e, []string{"join", "di-ab-an", "--from", "Di=100", "--to", "An=100", "--count", "20", "--format", format})
		if code != exitIncomplete || !strings.Contains(errText.String(), "a field is missing") || !strings.Contains(strings.ToLower(out.String()), "incomplete") {
			t.Errorf("%s: exit %d: %s", format, code, errText.String())
		}
	}
}

func TestJoinPrints(t *testing.T) {
	t.Chdir(t.TempDir())
	args := []string{"join", "di-an-fo", "--from", "Di=50,An=50", "--to", "Fo=100", "--count", "30", "--quiet", "--read", "Fo=30@1300", "--without", "Di"}
	for _, format := range formats {
		code, out, errText := run(append(args, "--format", format)...)
		if code != exitDone || errText != "" || !strings.Contains(out, "metastable") && !strings.Contains(out, "METASTABLE") {
			t.Errorf("%s: exit %d: %s", format, code, errText)
		}
	}
}
