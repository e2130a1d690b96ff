package render

import (
	"fmt"
	"math"
	"testing"

	"thalweg/ternary"
	"thalweg/ternary/descent"
)

// visions turn a colour, in linear sRGB, into what is seen of it. The matrices for
// a complete loss of one kind of cone are those of Machado, Oliveira & Fernandes
// 2009, IEEE Trans. Vis. Comput. Graph. 15, 1291–1298, severity 1.0, from memory;
// grey is the luminance of IEC 61966-2-1, as on a black and white printer.
var visions = map[string][3][3]float64{
	"full":   {{1, 0, 0}, {0, 1, 0}, {0, 0, 1}},
	"grey":   {{0.2126, 0.7152, 0.0722}, {0.2126, 0.7152, 0.0722}, {0.2126, 0.7152, 0.0722}},
	"protan": {{0.152286, 1.052583, -0.204868}, {0.114503, 0.786281, 0.099216}, {-0.003882, -0.048116, 1.051998}},
	"deutan": {{0.367322, 0.860646, -0.227968}, {0.280085, 0.672501, 0.047413}, {-0.011820, 0.042940, 0.968881}},
	"tritan": {{1.255528, -0.076749, -0.178779}, {-0.078411, 0.930809, 0.147602}, {0.004733, 0.691367, 0.303900}},
}

func linear(c Colour) (out [3]float64) {
	for i, v := range [3]uint8{c.R, c.G, c.B} {
		s := float64(v) / 255
		if s <= 0.04045 {
			out[i] = s / 12.92
		} else {
			out[i] = math.Pow((s+0.055)/1.055, 2.4)
		}
	}
	return out
}

// seen is a colour in CIELAB (D65) as one kind of vision sees it.
func seen(c Colour, vision [3][3]float64) lab {
	in := linear(c)
	var rgb [3]float64
	for i, row := range vision {
		rgb[i] = min(1, max(0, row[0]*in[0]+row[1]*in[1]+row[2]*in[2]))
	}
	f := func(v float64) float64 {
		if v > 216.0/24389 {
			return math.Cbrt(v)
		}
		return (24389.0/27*v + 16) / 116
	}
	x := f((0.4124564*rgb[0] + 0.3575761*rgb[1] + 0.1804375*rgb[2]) / 0.95047)
	y := f(0.2126729*rgb[0] + 0.7151522*rgb[1] + 0.0721750*rgb[2])
	z := f((0.0193339*rgb[0] + 0.1191920*rgb[1] + 0.9503041*rgb[2]) / 1.08883)
	return lab{116*y - 16, 500 * (x - y), 200 * (y - z)}
}

// apart is the colour difference ΔE*ab (CIE 15:2004); 2.3 is just noticeable side
// by side (Mahy, Van Eycken & Oosterlinck 1994, Color Res. Appl. 19, 105–121, from
// memory).
func apart(a, b lab) float64 {
	return math.Sqrt((a.L-b.L)*(a.L-b.L) + (a.a-b.a)*(a.a-b.a) + (a.b-b.b)*(a.b-b.b))
}

func TestVisionsKeepWhite(t *testing.T) {
	for name, m := range visions {
		if w := seen(white, m); apart(w, lab{100, 0, 0}) > 0.05 {
			t.Errorf("%s turns white into %v", name, w)
		}
	}
	// red and green of one luminance are one colour to a deuteranope, or nearly
	red, green := seen(Hex("D04020"), visions["deutan"]), seen(Hex("688000"), visions["deutan"])
	if full := apart(seen(Hex("D04020"), visions["full"]), seen(Hex("688000"), visions["full"])); apart(red, green) > full/4 {
		t.Errorf("red and green lie %.0f apart, for a deuteranope %.0f", full, apart(red, green))
	}
}

// grounds are the colours on which words and lines of a style stand.
func grounds(st Style) []Colour {
	out := append([]Colour{white}, st.Tints...)
	for _, c := range st.Tints {
		out = append(out, blend(c, white, 0.55)) // two liquids
	}
	return append(out, st.Ramp...)
}

// faintItems lists the words below 4.5:1, and the lines and symbols below 3:1, against
// any ground of the style (WCAG 2.1, success criteria 1.4.3 and 1.4.11). White
// cores and casings, and the fills of areas, are no marks.
func faintItems(s *Scene, st Style) (out []string) {
	least := func(c Colour) float64 {
		r := math.Inf(1)
		for _, g := range grounds(st) {
			r = min(r, contrast(c, g))
		}
		return r
	}
	for _, x := range texts(s) {
		if r := least(x.Colour); r < 4.5 {
			out = append(out, fmt.Sprintf("%s %q has a contrast of %.2f:1", x.Role, x.label(), r))
		}
	}
	for _, p := range paths(s) {
		if p.Stroke != nil && p.Stroke.Colour != white {
			if r := least(p.Stroke.Colour); r < 3 {
				out = append(out, fmt.Sprintf("%s is drawn with a contrast of %.2f:1", p.Role, r))
			}
		}
		switch p.Role {
		case "marker", "arrowhead", "leader end", "unmixed":
			if p.Fill != nil && *p.Fill != white && least(*p.Fill) < 3 {
				out = append(out, fmt.Sprintf("%s is filled with a contrast of %.2f:1", p.Role, least(*p.Fill)))
			}
		}
	}
	return out
}

// Paths that some eye cannot tell apart by colour are told apart by the symbols
// at their starts and ends; in ink also by the dashes of their cores.
func TestPathsAreToldApart(t *testing.T) {
	for _, st := range []Style{ColourStyle(), InkStyle()} {
		n := max(len(st.PathColours), len(st.PathDashes))
		if n < 4 {
			t.Fatalf("only %d kinds of paths", n)
		}
		var f Figure
		for i := range n {
			bulk := ternary.Composition{0.1 * float64(i+1), 0.2, 0.8 - 0.1*float64(i+1)}
			f.Paths = append(f.Paths, &descent.Path{Bulk: bulk})
			f.Samples = append(f.Samples, Sample{Composition: bulk})
		}
		placed := placeSamples(f, st)
		for i := range n {
			for j := range i {
				symbols := fmt.Sprint(sampleShape(placed[i].shape, Point{}, 1)) != fmt.Sprint(sampleShape(placed[j].shape, Point{}, 1))
				dashes := fmt.Sprint(st.pathDash(i)) != fmt.Sprint(st.pathDash(j))
				for name, m := range visions {
					const plain = 20.0
					far := apart(seen(st.pathColour(i), m), seen(st.pathColour(j), m)) > plain
					if !far && !symbols {
						t.Errorf("paths %d and %d are one to %s vision (ink: %v)", i, j, name, st.Ink)
					}
					if name == "full" && !far && !dashes {
						t.Errorf("paths %d and %d differ by their symbols alone (ink: %v)", i, j, st.Ink)
					}
				}
			}
		}
	}
}

// Tints differ to full vision, and where fields meet they are separated by a line
// and named (TestEveryFieldWithRoomIsNamed), which doubles them for everyone else.
func TestTintsDiffer(t *testing.T) {
	st := ColourStyle()
	for i, a := range st.Tints {
		for j, b := range st.Tints[:i] {
			if d := apart(seen(a, visions["full"]), seen(b, visions["full"])); d < 2*2.3 {
				t.Errorf("tints %d and %d lie %.1f apart", i, j, d)
			}
		}
	}
}

// oklab is a colour in the space of Ottosson 2020 ("A perceptual color space for
// image processing"), numbers from memory: another measure of evenness than the
// one that the scale was made with.
func oklab(c Colour) lab {
	v := linear(c)
	l := math.Cbrt(0.4122214708*v[0] + 0.5363325363*v[1] + 0.0514459929*v[2])
	m := math.Cbrt(0.2119034982*v[0] + 0.6806995451*v[1] + 0.1073969566*v[2])
	s := math.Cbrt(0.0883024619*v[0] + 0.2817188376*v[1] + 0.6299787005*v[2])
	return lab{0.2104542553*l + 0.7936177850*m - 0.0040720468*s,
		1.9779984951*l - 2.4285922050*m + 0.4505937099*s,
		0.0259040371*l + 0.7827717662*m - 0.8086757660*s}
}

func TestScaleOfTemperaturesIsEven(t *testing.T) {
	ramp := temperatureRamp(9)
	low, high := math.Inf(1), 0.0
	for i := 1; i < len(ramp); i++ {
		d := apart(oklab(ramp[i-1]), oklab(ramp[i]))
		low, high = min(low, d), max(high, d)
	}
	if high > 1.25*low {
		t.Errorf("steps of %.4f to %.4f", low, high)
	}
	for name, m := range visions {
		first := seen(ramp[0], m)
		last := first
		for i := 1; i < len(ramp); i++ {
			c := seen(ramp[i], m)
			if c.L >= last.L {
				t.Errorf("%s: step %d is not darker", name, i)
			}
			last = c
		}
		if first.L-last.L < 15 {
			t.Errorf("%s: the scale spans %.1f of lightness", name, first.L-last.L)
		}
	}
	fine := temperatureRamp(rampSteps)
	for i := 1; i < len(fine); i++ {
		if d := apart(seen(fine[i-1], visions["full"]), seen(fine[i], visions["full"])); d > 2.3 {
			t.Errorf("step %d of the shading is seen: %.2f", i, d)
		}
	}
}

// The conversion from CIELAB is the inverse of that to it.
func TestLabIsInverted(t *testing.T) {
	for _, c := range []Colour{Hex("000000"), Hex("FFFFFF"), Hex("0063A8"), Hex("B8420F"), Hex("F6EFDC"), Hex("030A05")} {
		if got := seen(c, visions["full"]).colour(); got != c {
			t.Errorf("%v becomes %v", c, got)
		}
	}
}
