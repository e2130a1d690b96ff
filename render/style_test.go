package render

import (
	"math"
	"strings"
	"testing"
)

// contrast is the ratio of WCAG 2.1 (relative luminance, W3C Recommendation of
// 5 June 2018).
func contrast(a, b Colour) float64 {
	lum := func(c Colour) float64 {
		f := func(v uint8) float64 {
			s := float64(v) / 255
			if s <= 0.03928 {
				return s / 12.92
			}
			return math.Pow((s+0.055)/1.055, 2.4)
		}
		return 0.2126*f(c.R) + 0.7152*f(c.G) + 0.0722*f(c.B)
	}
	x, y := lum(a), lum(b)
	if x < y {
		x, y = y, x
	}
	return (x + 0.05) / (y + 0.05)
}

func TestContrastFormula(t *testing.T) {
	// black on white is 21:1 by definition; #767676 on white is the well-known
	// 4.54:1 limit grey.
	if c := contrast(white, Hex("000000")); math.Abs(c-21) > 1e-9 {
		t.Errorf("black on white: %g", c)
	}
	if c := contrast(white, Hex("767676")); math.Abs(c-4.54) > 0.005 {
		t.Errorf("#767676 on white: %g, want 4.54", c)
	}
}

func TestStyleNamed(t *testing.T) {
	for name, want := range map[string]float64{"": 174, "single-84": 84, "heavy-185": 185, "slides": 310} {
		if s, err := StyleNamed(name); err != nil || s.Width != want || name != "" && s.Name != name {
			t.Errorf("%q gives %q, %g mm wide, %v", name, s.Name, s.Width, err)
		}
	}
	if _, err := StyleNamed("neon"); err == nil || !strings.Contains(err.Error(), "double-190") {
		t.Errorf("an unknown style: %v", err)
	}
}

func TestNeighboursDifferInTint(t *testing.T) {
	eachFigure(t, func(t *testing.T, d *drawing) {
		tint := d.tints()
		for _, c := range d.pr.Curves {
			if c.Solids[1] < 0 {
				continue // a second liquid: the field beyond is the same solid's
			}
			a, ok := tint(c.Solids[0])
			b, _ := tint(c.Solids[1])
			if ok && c.Solids[0] != c.Solids[1] && a == b {
				t.Errorf("fields %d and %d share a boundary and a tint", c.Solids[0], c.Solids[1])
			}
		}
	})
}
