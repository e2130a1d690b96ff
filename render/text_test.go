package render

import (
	"math"
	"strings"
	"testing"

	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
)

// Liberation Sans is drawn to the widths of Helvetica, which are public in
// the Adobe Core 14 AFM files (thousandths of an em; values from memory).
func TestWidthsAreThoseOfHelvetica(t *testing.T) {
	cases := []struct {
		font Font
		char string
		want float64
	}{
		{Regular, "A", 667}, {Regular, "a", 556}, {Regular, "i", 222}, {Regular, "W", 944},
		{Regular, " ", 278}, {Regular, "0", 556}, {Regular, "O", 778}, {Regular, "S", 667},
		{Italic, "A", 667}, {Italic, "m", 833}, {Bold, "A", 722}, {Bold, "a", 556}, {Bold, "i", 278},
	}
	for _, c := range cases {
		got := TextWidth(PlainRuns(c.char, 1000, c.font)) / mmPerPoint
		if math.Abs(got-c.want) > 0.7 { // AFM widths are whole numbers, 1/2048 em here
			t.Errorf("%v %q: width %.2f, want %g", c.font, c.char, got, c.want)
		}
	}
}

// A second reader of the same font file must agree on width and kerning.
func TestWidthAgainstSecondReader(t *testing.T) {
	checked := 0
	for i := range fontCount {
		f, err := sfnt.Parse(fontData[i])
		if err != nil {
			t.Fatal(err)
		}
		for _, s := range []string{"AVATAR", "Temperature", "To", "CaAl", "Åkermanite", "α-β′ ≤ π"} {
			want := secondWidth(t, f, s)
			got := TextWidth(PlainRuns(s, 10, i)) / mmPerPoint / 10
			if math.Abs(got-want) > 1e-9 {
				t.Errorf("font %d %q: %.6f em, second reader %.6f", i, s, got, want)
			}
			checked++
		}
	}
	if checked == 0 {
		t.Fatal("nothing checked")
	}
}

func secondWidth(t *testing.T, f *sfnt.Font, s string) float64 {
	t.Helper()
	var buf sfnt.Buffer
	upem := fixed.I(int(f.UnitsPerEm()))
	var sum fixed.Int26_6
	prev := sfnt.GlyphIndex(0)
	for _, r := range s {
		g, err := f.GlyphIndex(&buf, r)
		if err != nil || g == 0 {
			t.Fatalf("%q: %v", r, err)
		}
		if prev != 0 {
			if k, err := f.Kern(&buf, prev, g, upem, font.HintingNone); err == nil {
				sum += k
			}
		}
		a, err := f.GlyphAdvance(&buf, g, upem, font.HintingNone)
		if err != nil {
			t.Fatal(err)
		}
		sum += a
		prev = g
	}
	return float64(sum) / float64(upem)
}

func TestKerningAndDigits(t *testing.T) {
	w := func(s string) float64 { return TextWidth(PlainRuns(s, 10, Regular)) }
	if !(w("AV") < w("A")+w("V")) {
		t.Error("AV is not kerned")
	}
	if math.Abs(w("1111")-4*w("0")) > 1e-12 {
		t.Error("digits do not keep their common width")
	}
}

func TestSubscriptRuns(t *testing.T) {
	runs := FormulaRuns("SiO2", 8, Bold)
	if len(runs) != 2 || runs[0].Text != "SiO" || runs[1].Text != "2" {
		t.Fatalf("runs %+v", runs)
	}
	if runs[1].Size != 6 || math.Abs(runs[1].Rise+0.16*8*25.4/72) > 1e-12 || runs[1].Font != Bold {
		t.Errorf("subscript %+v, want 6 pt, 0.16 em below, bold", runs[1])
	}
	if PlainRuns("", 8, Regular) != nil || FormulaRuns("", 8, Regular) != nil {
		t.Error("empty labels must have no runs")
	}
}

// The vertical metrics must agree with the drawn letters.
func TestVerticalMetricsAgainstOutlines(t *testing.T) {
	const size = 100
	height := func(s string) (lo, hi float64) {
		a, b := TextItem{Runs: PlainRuns(s, size, Regular)}.Outline().Bounds()
		return a.Y, b.Y
	}
	if _, hi := height("H"); math.Abs(hi-CapHeight(size)) > 0.01*size*mmPerPoint {
		t.Errorf("cap height %g, H is %g", CapHeight(size), hi)
	}
	if _, hi := height("x"); math.Abs(hi-XHeight(size)) > 0.01*size*mmPerPoint {
		t.Errorf("x height %g, x is %g", XHeight(size), hi)
	}
	if lo, _ := height("gpqy"); Descent(size) < -lo || Descent(size) > -lo+0.02*size*mmPerPoint {
		t.Errorf("descent %g, letters reach %g", Descent(size), lo)
	}
}

func TestOutlineIsPlacedAndTurned(t *testing.T) {
	flat := TextItem{Runs: PlainRuns("Hx", 10, Regular)}
	lo, hi := flat.Outline().Bounds()
	turned := flat
	turned.X, turned.Y, turned.Angle = 30, 40, 90
	tlo, thi := turned.Outline().Bounds()
	want := []float64{30 - hi.Y, 40 + lo.X, 30 - lo.Y, 40 + hi.X}
	for i, got := range []float64{tlo.X, tlo.Y, thi.X, thi.Y} {
		if math.Abs(got-want[i]) > 1e-9 {
			t.Fatalf("turned box %v %v, want %v", tlo, thi, want)
		}
	}
}

func TestFontLicenceTravels(t *testing.T) {
	if !strings.Contains(FontLicence(), "SIL OPEN FONT LICENSE Version 1.1") {
		t.Error("the font licence is missing")
	}
}
