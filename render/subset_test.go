package render

import (
	"slices"
	"testing"

	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
)

// Every character of a subset must keep its number, width, kerning and shape
// when read by a second reader of fonts.
func TestSubsetAgainstSecondReader(t *testing.T) {
	for i := range fontCount {
		full, err := sfnt.Parse(fontData[i])
		if err != nil {
			t.Fatal(err)
		}
		s := mustSubset(t, i, "AVTo.Åéαβ′≤→π·0123 Wµ–")
		small, err := sfnt.Parse(s.truetype(true))
		if err != nil {
			t.Fatalf("font %d: the subset cannot be read: %v", i, err)
		}
		var buf sfnt.Buffer
		upem := fixed.I(int(full.UnitsPerEm()))
		for _, r := range s.runes {
			a, _ := full.GlyphIndex(&buf, r)
			b, err := small.GlyphIndex(&buf, r)
			if err != nil || b == 0 || uint16(b) != s.index[r] {
				t.Errorf("font %d: %q has number %d in the subset (%v)", i, r, b, err)
				continue
			}
			wa, _ := full.GlyphAdvance(&buf, a, upem, font.HintingNone)
			wb, _ := small.GlyphAdvance(&buf, b, upem, font.HintingNone)
			if wa != wb {
				t.Errorf("font %d: %q is %v wide, was %v", i, r, wb, wa)
			}
			sa := shapeOf(t, full, a, upem)
			if sb := shapeOf(t, small, b, upem); !slices.Equal(sa, sb) {
				t.Errorf("font %d: the shape of %q changed", i, r)
			}
		}
		pair := func(f *sfnt.Font, x, y rune) fixed.Int26_6 {
			a, _ := f.GlyphIndex(&buf, x)
			b, _ := f.GlyphIndex(&buf, y)
			k, _ := f.Kern(&buf, a, b, upem, font.HintingNone)
			return k
		}
		if k := pair(small, 'A', 'V'); k == 0 || k != pair(full, 'A', 'V') {
			t.Errorf("font %d: kerning of AV is %v, was %v", i, k, pair(full, 'A', 'V'))
		}
		if k := pair(small, '1', '1'); k != 0 {
			t.Errorf("font %d: digits are kerned by %v", i, k)
		}
	}
}

func mustSubset(t *testing.T, f Font, text string) *subset {
	t.Helper()
	fc, err := loadFace(f)
	if err != nil {
		t.Fatal(err)
	}
	used := make(map[rune]bool)
	for _, r := range text {
		used[r] = true
	}
	s, err := newSubset(fc, used)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func shapeOf(t *testing.T, f *sfnt.Font, g sfnt.GlyphIndex, upem fixed.Int26_6) []sfnt.Segment {
	t.Helper()
	var buf sfnt.Buffer
	segs, err := f.LoadGlyph(&buf, g, upem, nil)
	if err != nil {
		t.Fatal(err)
	}
	return slices.Clone(segs)
}

// The checksum of a whole TrueType file is fixed by its definition
// (OpenType specification, head table: checksumAdjustment).
func TestSubsetChecksums(t *testing.T) {
	for _, web := range []bool{false, true} {
		b := mustSubset(t, Regular, "Å12 AV").truetype(web)
		if sum := checksum(b); sum != 0xB1B0AFBA {
			t.Errorf("web %v: file checksum %08X", web, sum)
		}
		n := int(be.Uint16(b[4:]))
		for i := range n {
			rec := b[12+16*i:]
			at, size := be.Uint32(rec[8:]), be.Uint32(rec[12:])
			table := slices.Clone(b[at : at+size])
			if string(rec[:4]) == "head" {
				clear(table[8:12])
			}
			if sum := checksum(table); sum != be.Uint32(rec[4:]) {
				t.Errorf("web %v: table %s has checksum %08X, says %08X", web, rec[:4], sum, be.Uint32(rec[4:]))
			}
		}
	}
}

// Two characters may share a shape (micro sign and Greek mu in some fonts);
// each must still be found again as itself.
func TestSubsetKeepsCharactersApart(t *testing.T) {
	s := mustSubset(t, Regular, "µμΩ\u2126ΔA")
	seen := make(map[uint16]rune)
	for _, r := range s.runes {
		if q, ok := seen[s.index[r]]; ok {
			t.Errorf("%q and %q share a number", q, r)
		}
		seen[s.index[r]] = r
	}
	if len(seen) < 5 {
		t.Fatalf("only %d characters", len(seen))
	}
}
