package render

import (
	_ "embed" // for the font licence
	"fmt"
	"sync"
	"unicode"

	"github.com/go-fonts/liberation/liberationsansbold"
	"github.com/go-fonts/liberation/liberationsansitalic"
	"github.com/go-fonts/liberation/liberationsansregular"
	"github.com/tdewolff/font"
)

// fontFamily is the family name of the built-in faces: metrics of Arial and
// Helvetica, SIL Open Font License (LICENSE-LiberationSans).
const fontFamily = "Liberation Sans"

//go:embed LICENSE-LiberationSans
var fontLicence string

// FontLicence returns the licence of the built-in fonts, which travels with
// every copy of the program.
func FontLicence() string { return fontLicence }

// face is one loaded font. The parsed tables are never changed, so a face is
// safe for any number of goroutines.
type face struct {
	font   Font
	name   string // PostScript name
	style  string // subfamily name
	sfnt   *font.SFNT
	upem   float64
	weight int

	mu       sync.Mutex
	outlines map[uint16]Path // em units / upem, y up
}

// glyph is one character set in a face; kern is the correction after it.
// Both lengths are font units.
type glyph struct {
	r       rune
	gid     uint16 // 0: the face has no such character
	advance int
	kern    int
}

// faces are parsed on first use, about 0.2 ms each.
var faces = [fontCount]func() (*face, error){
	Regular: loader(Regular, "LiberationSans", "Regular", 400, fontData[Regular]),
	Italic:  loader(Italic, "LiberationSans-Italic", "Italic", 400, fontData[Italic]),
	Bold:    loader(Bold, "LiberationSans-Bold", "Bold", 700, fontData[Bold]),
}

var fontData = [fontCount][]byte{
	Regular: liberationsansregular.TTF,
	Italic:  liberationsansitalic.TTF,
	Bold:    liberationsansbold.TTF,
}

func loader(f Font, name, style string, weight int, ttf []byte) func() (*face, error) {
	return sync.OnceValues(func() (*face, error) {
		s, err := font.ParseSFNT(ttf, 0)
		if err != nil || !s.IsTrueType {
			return nil, fmt.Errorf("built-in font %s cannot be read (damaged program file?): %w", name, err)
		}
		return &face{
			font: f, name: name, style: style, weight: weight,
			sfnt: s, upem: float64(s.Head.UnitsPerEm),
			outlines: make(map[uint16]Path),
		}, nil
	})
}

// loadFace returns the face of f.
func loadFace(f Font) (*face, error) { return faces[clampFont(f)]() }

// clampFont takes a value outside the declared ones as Regular.
func clampFont(f Font) Font {
	if f < 0 || f >= fontCount {
		return Regular
	}
	return f
}

// shape sets the characters of text one by one in reading order.
func (f *face) shape(text string) []glyph {
	gs := make([]glyph, 0, len(text))
	for _, r := range text {
		g := glyph{r: r, gid: f.index(r)}
		g.advance = int(f.sfnt.GlyphAdvance(g.gid))
		if n := len(gs); n > 0 {
			gs[n-1].kern = f.kerning(gs[n-1], g)
		}
		gs = append(gs, g)
	}
	return gs
}

// index returns the glyph of r, 0 for none. Control characters have none,
// and only the basic plane is served, which is all the family covers.
func (f *face) index(r rune) uint16 {
	if r > 0xFFFF || unicode.IsControl(r) {
		return 0
	}
	return f.sfnt.GlyphIndex(r)
}

// kerning returns the correction between two glyphs. Pairs of digits are
// left at their common width, so numbers line up in columns and "1100" does
// not look uneven beside "1200".
func (f *face) kerning(a, b glyph) int {
	if isDigit(a.r) && isDigit(b.r) {
		return 0
	}
	return int(f.sfnt.Kerning(a.gid, b.gid))
}

// width returns the advance of text in em.
func (f *face) width(text string) float64 {
	units := 0
	for _, g := range f.shape(text) {
		units += g.advance + g.kern
	}
	return float64(units) / f.upem
}

// outline returns the shape of a glyph in em, origin on the baseline.
func (f *face) outline(gid uint16) Path {
	f.mu.Lock()
	defer f.mu.Unlock()
	p, ok := f.outlines[gid]
	if !ok {
		var b outliner
		if err := f.sfnt.GlyphPath(&b, gid, 0, 0, 0, 1/f.upem, font.NoHinting); err == nil {
			p = b.Path
		}
		f.outlines[gid] = p
	}
	return p
}

// outliner collects a glyph's contours, raising its quadratic curves to cubics.
type outliner struct {
	Path
	cur Point
}

func (o *outliner) MoveTo(x, y float64) { o.Path.MoveTo(x, y); o.cur = Point{x, y} }
func (o *outliner) LineTo(x, y float64) { o.Path.LineTo(x, y); o.cur = Point{x, y} }

func (o *outliner) QuadTo(cx, cy, x, y float64) {
	o.CubeTo(
		o.cur.X+2./3*(cx-o.cur.X), o.cur.Y+2./3*(cy-o.cur.Y),
		x+2./3*(cx-x), y+2./3*(cy-y), x, y)
}

func (o *outliner) CubeTo(x1, y1, x2, y2, x, y float64) {
	o.Path.CubeTo(x1, y1, x2, y2, x, y)
	o.cur = Point{x, y}
}

func isDigit(r rune) bool { return '0' <= r && r <= '9' }
