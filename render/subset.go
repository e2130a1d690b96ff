package render

import (
	"encoding/binary"
	"fmt"
	"math"
	"math/bits"
	"slices"
	"sort"
	"unicode/utf16"
)

// subset is the part of a face that a scene uses. Glyph 0 is the empty
// "not defined"; glyphs 1..len(runes) are the characters in ascending order,
// so a character's number is its place; parts of accented letters follow.
type subset struct {
	face  *face
	runes []rune
	gids  []uint16          // by new number: glyph in the full font
	index map[rune]uint16   // new number of a character
	part  map[uint16]uint16 // new number of a composite's part
}

// subsets returns the subset of every face the scene uses, in Font order,
// or a *GlyphError for the first character that cannot be drawn.
func (s *Scene) subsets() ([]*subset, error) {
	var used [fontCount]map[rune]bool
	for _, l := range s.Layers {
		for _, it := range l.Items {
			t, ok := it.(*TextItem)
			if !ok {
				continue
			}
			for _, r := range t.Runs {
				f, err := loadFace(r.Font)
				if err != nil {
					return nil, err
				}
				if used[f.font] == nil {
					used[f.font] = make(map[rune]bool)
				}
				for _, c := range r.Text {
					if !used[f.font][c] && f.index(c) == 0 {
						return nil, &GlyphError{Char: c, Label: t.label(), Layer: l.Name}
					}
					used[f.font][c] = true
				}
			}
		}
	}
	var out []*subset
	for i, m := range used {
		if len(m) == 0 {
			continue
		}
		f, err := loadFace(Font(i))
		if err != nil {
			return nil, err
		}
		sub, err := newSubset(f, m)
		if err != nil {
			return nil, err
		}
		out = append(out, sub)
	}
	return out, nil
}

func newSubset(f *face, used map[rune]bool) (*subset, error) {
	s := &subset{face: f, gids: []uint16{0}, index: make(map[rune]uint16), part: make(map[uint16]uint16)}
	for r := range used {
		s.runes = append(s.runes, r)
	}
	slices.Sort(s.runes)
	for _, r := range s.runes {
		s.index[r] = uint16(len(s.gids))
		s.gids = append(s.gids, f.index(r))
	}
	for i := 1; i <= len(s.runes); i++ {
		deps, err := f.sfnt.Glyf.Dependencies(s.gids[i])
		if err != nil {
			return nil, fmt.Errorf("built-in font %s: %w", f.name, err)
		}
		for _, g := range deps[1:] {
			if _, ok := s.part[g]; !ok {
				s.part[g] = uint16(len(s.gids))
				s.gids = append(s.gids, g)
			}
		}
	}
	return s, nil
}

// advance returns the width of new glyph i in thousandths of an em.
func (s *subset) advance(i int) float64 {
	return float64(s.face.sfnt.GlyphAdvance(s.gids[i])) * 1000 / s.face.upem
}

// truetype returns the subset as a TrueType file. The tables a page
// description needs are always there; web adds those a browser asks for.
// Hinting programs are left out: figures are drawn at high resolution or
// scaled. The bytes depend on the face and the characters alone.
func (s *subset) truetype(web bool) []byte {
	old := s.face.sfnt.Tables
	glyf, loca := s.glyphs()
	t := map[string][]byte{
		"glyf": glyf,
		"loca": loca,
		"head": slices.Clone(old["head"]),
		"hhea": slices.Clone(old["hhea"]),
		"maxp": slices.Clone(old["maxp"]),
		"hmtx": s.metrics(),
	}
	n := uint16(len(s.gids))
	be.PutUint32(t["head"][8:], 0)                                // whole-file checksum, set by packFont
	be.PutUint16(t["head"][16:], be.Uint16(t["head"][16:])&^0x1C) // no hinting
	be.PutUint16(t["head"][50:], 1)                               // long loca
	be.PutUint16(t["hhea"][34:], n)
	be.PutUint16(t["maxp"][4:], n)
	clear(t["maxp"][14:28]) // zones, storage, functions, stack and program sizes
	be.PutUint16(t["maxp"][14:], 1)
	if web {
		t["OS/2"] = s.os2()
		t["cmap"] = s.cmap()
		t["name"] = s.names()
		t["post"] = append([]byte{0, 3, 0, 0}, old["post"][4:32]...)
		if k := s.kern(); k != nil {
			t["kern"] = k
		}
	}
	return packFont(t)
}

var be = binary.BigEndian

// packFont writes tables as a TrueType file with its checksums.
func packFont(tables map[string][]byte) []byte {
	tags := make([]string, 0, len(tables))
	for tag := range tables {
		tags = append(tags, tag)
	}
	sort.Strings(tags)
	n := len(tags)
	log := bits.Len(uint(n)) - 1
	out := be.AppendUint32(nil, 0x00010000)
	for _, v := range []int{n, 16 << log, log, 16 * (n - 1<<log)} {
		out = be.AppendUint16(out, uint16(v))
	}
	at := 12 + 16*n
	var body []byte
	head := 0
	for _, tag := range tags {
		b := tables[tag]
		if tag == "head" {
			head = at + len(body)
		}
		out = append(out, tag...)
		out = be.AppendUint32(out, checksum(b))
		out = be.AppendUint32(out, uint32(at+len(body)))
		out = be.AppendUint32(out, uint32(len(b)))
		body = append(body, b...)
		for len(body)%4 != 0 {
			body = append(body, 0)
		}
	}
	out = append(out, body...)
	be.PutUint32(out[head+8:], 0xB1B0AFBA-checksum(out))
	return out
}

// checksum adds the big-endian words of b, the last one padded with zeros.
func checksum(b []byte) uint32 {
	var sum uint32
	for ; len(b) >= 4; b = b[4:] {
		sum += be.Uint32(b)
	}
	if len(b) > 0 {
		var last [4]byte
		copy(last[:], b)
		sum += be.Uint32(last[:])
	}
	return sum
}

// glyphs returns the outlines and their index with long offsets.
func (s *subset) glyphs() (glyf, loca []byte) {
	loca = be.AppendUint32(nil, 0)
	for _, g := range s.gids {
		if g != 0 {
			glyf = append(glyf, s.glyph(s.face.sfnt.Glyf.Get(g))...)
			for len(glyf)%4 != 0 {
				glyf = append(glyf, 0)
			}
		}
		loca = be.AppendUint32(loca, uint32(len(glyf)))
	}
	return glyf, loca
}

// glyph returns one outline without its hinting program, parts renumbered.
func (s *subset) glyph(b []byte) []byte {
	if len(b) < 10 {
		return nil
	}
	contours := int(int16(be.Uint16(b)))
	if contours >= 0 {
		at := 10 + 2*contours
		size := int(be.Uint16(b[at:]))
		out := append(slices.Clone(b[:at]), 0, 0)
		return append(out, b[at+2+size:]...)
	}
	out := slices.Clone(b)
	for at := 10; ; {
		flags := be.Uint16(out[at:])
		be.PutUint16(out[at:], flags&^0x0100) // no program after the last part
		be.PutUint16(out[at+2:], s.part[be.Uint16(out[at+2:])])
		at += componentSize(flags)
		if flags&0x0020 == 0 {
			return out[:at]
		}
	}
}

// componentSize is the length of a composite glyph's part with these flags.
func componentSize(flags uint16) int {
	n := 6
	if flags&0x0001 != 0 {
		n += 2
	}
	switch {
	case flags&0x0008 != 0:
		n += 2
	case flags&0x0040 != 0:
		n += 4
	case flags&0x0080 != 0:
		n += 8
	}
	return n
}

func (s *subset) metrics() []byte {
	var b []byte
	for _, g := range s.gids {
		b = be.AppendUint16(b, s.face.sfnt.GlyphAdvance(g))
		b = be.AppendUint16(b, uint16(s.face.sfnt.Hmtx.LeftSideBearing(g)))
	}
	return b
}

// os2 is the original table with the first and last character corrected.
func (s *subset) os2() []byte {
	b := slices.Clone(s.face.sfnt.Tables["OS/2"])
	be.PutUint16(b[64:], uint16(s.runes[0]))
	be.PutUint16(b[66:], uint16(s.runes[len(s.runes)-1]))
	return b
}

// cmap maps each stretch of consecutive characters by a constant offset,
// which holds because glyphs are numbered in character order (format 4).
func (s *subset) cmap() []byte {
	var first, last, delta []uint16
	for i, r := range s.runes {
		c := uint16(r)
		if n := len(last); n > 0 && last[n-1]+1 == c {
			last[n-1] = c
			continue
		}
		first, last = append(first, c), append(last, c)
		delta = append(delta, uint16(i+1)-c)
	}
	if last[len(last)-1] != math.MaxUint16 {
		first, last, delta = append(first, math.MaxUint16), append(last, math.MaxUint16), append(delta, 1)
	}
	n := len(last)
	log := bits.Len(uint(n)) - 1
	words := []uint16{0, 1, 3, 1, 0, 12} // version, one table: Windows, Unicode, offset
	words = append(words, 4, uint16(16+8*n), 0, uint16(2*n), uint16(2<<log), uint16(log), uint16(2*n-2<<log))
	words = append(words, last...)
	words = append(words, 0)
	words = append(words, first...)
	words = append(words, delta...)
	words = append(words, make([]uint16, n)...)
	return appendWords(nil, words)
}

// kern is the pair table of the characters used, or nil without pairs, so
// that a browser sets the text as wide as it was measured.
func (s *subset) kern() []byte {
	var pairs []byte
	for i, a := range s.runes {
		for j, b := range s.runes {
			k := s.face.kerning(glyph{r: a, gid: s.gids[i+1]}, glyph{r: b, gid: s.gids[j+1]})
			if k != 0 {
				pairs = appendWords(pairs, []uint16{uint16(i + 1), uint16(j + 1), uint16(k)})
			}
		}
	}
	n := len(pairs) / 6
	if n == 0 || 14+len(pairs) > math.MaxUint16 {
		return nil
	}
	log := bits.Len(uint(n)) - 1
	head := []uint16{0, 1, 0, uint16(14 + len(pairs)), 1, uint16(n), uint16(6 << log), uint16(log), uint16(6 * (n - 1<<log))}
	return append(appendWords(nil, head), pairs...)
}

// names identifies the font to programs that insist on it.
func (s *subset) names() []byte {
	full := fontFamily + " " + s.face.style
	entries := []struct {
		id   uint16
		text string
	}{{1, fontFamily}, {2, s.face.style}, {3, s.face.name + " subset"}, {4, full}, {5, "Version 2"}, {6, s.face.name}}
	head := []uint16{0, uint16(len(entries)), uint16(6 + 12*len(entries))}
	var text []byte
	for _, e := range entries {
		u := utf16.Encode([]rune(e.text))
		head = append(head, 3, 1, 0x0409, e.id, uint16(2*len(u)), uint16(len(text)))
		text = appendWords(text, u)
	}
	return append(appendWords(nil, head), text...)
}

func appendWords(b []byte, words []uint16) []byte {
	for _, w := range words {
		b = be.AppendUint16(b, w)
	}
	return b
}
