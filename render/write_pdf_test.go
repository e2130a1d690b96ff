package render

import (
	"bytes"
	"compress/zlib"
	"fmt"
	"io"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"
	"unicode/utf16"

	"github.com/tdewolff/font"
)

// parsedPDF is a file read back through its cross-reference table.
type parsedPDF struct {
	objects map[int][]byte
	trailer string
}

// parsePDF reads a file the strict way: every object at its stated place,
// every stream of its stated length.
func parsePDF(t *testing.T, b []byte) parsedPDF {
	t.Helper()
	tail := regexp.MustCompile(`(?s)startxref\n(\d+)\n%%EOF\n$`).FindSubmatch(b)
	if tail == nil || !bytes.HasPrefix(b, []byte("%PDF-1.7\n")) {
		t.Fatal("no PDF header or end")
	}
	at, _ := strconv.Atoi(string(tail[1]))
	var count int
	if _, err := fmt.Sscanf(string(b[at:]), "xref\n0 %d\n", &count); err != nil {
		t.Fatal(err)
	}
	table := b[at+len(fmt.Sprintf("xref\n0 %d\n", count)):]
	p := parsedPDF{objects: make(map[int][]byte), trailer: string(table[20*count:])}
	for i := 1; i < count; i++ {
		offset, err := strconv.Atoi(string(table[20*i : 20*i+10]))
		if err != nil {
			t.Fatal(err)
		}
		head := fmt.Sprintf("%d 0 obj\n", i)
		if !bytes.HasPrefix(b[offset:], []byte(head)) {
			t.Fatalf("object %d is not at %d", i, offset)
		}
		body := b[offset+len(head):]
		p.objects[i] = body[:bytes.Index(body, []byte("\nendobj\n"))]
		if m := regexp.MustCompile(`/Length (\d+) >>\nstream\n`).FindSubmatchIndex(p.objects[i]); m != nil {
			n, _ := strconv.Atoi(string(body[m[2]:m[3]]))
			if !bytes.HasPrefix(body[m[1]+n:], []byte("\nendstream\nendobj\n")) {
				t.Fatalf("object %d: stream is not %d long", i, n)
			}
			p.objects[i] = body[:m[1]+n]
		}
	}
	return p
}

// find returns the first object whose text matches, and its capture groups.
func (p parsedPDF) find(t *testing.T, pattern string) (int, []string) {
	t.Helper()
	re := regexp.MustCompile(pattern)
	for i := 1; i <= len(p.objects); i++ {
		if m := re.FindStringSubmatch(string(p.objects[i])); m != nil {
			return i, m
		}
	}
	t.Fatalf("no object matches %s", pattern)
	return 0, nil
}

func (p parsedPDF) inflate(t *testing.T, n int) []byte {
	t.Helper()
	_, data, ok := bytes.Cut(p.objects[n], []byte("stream\n"))
	if !ok {
		t.Fatalf("object %d is no stream", n)
	}
	r, err := zlib.NewReader(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	out, err := io.ReadAll(r)
	if err != nil {
		t.Fatal(err)
	}
	return out
}

func number(t *testing.T, s string) int {
	t.Helper()
	n, err := strconv.Atoi(s)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func TestPDFStructure(t *testing.T) {
	s := sampleScene()
	p := parsePDF(t, mustWrite(t, s, "pdf", Options{Producer: "test"}))
	for n, body := range p.objects {
		text, _, _ := bytes.Cut(body, []byte("stream\n"))
		for _, ref := range regexp.MustCompile(`(\d+) 0 R`).FindAllSubmatch(text, -1) {
			if p.objects[number(t, string(ref[1]))] == nil {
				t.Errorf("object %d points to missing %s", n, ref[1])
			}
		}
	}
	_, box := p.find(t, `/MediaBox \[0 0 ([\d.]+) ([\d.]+)\]`)
	for i, mm := range []float64{s.Width, s.Height} {
		pt, _ := strconv.ParseFloat(box[1+i], 64)
		if math.Abs(pt*25.4/72-mm) > 1e-5 {
			t.Errorf("page side %s pt is not %g mm", box[1+i], mm)
		}
	}
	p.find(t, `/Type /Catalog .*/Lang \(en\) /MarkInfo << /Marked true >> .*/DisplayDocTitle true`)
	_, alt := p.find(t, `/S /Figure .*/Alt <FEFF([0-9A-F]+)>`)
	if got := fromUTF16(t, alt[1]); got != s.Description {
		t.Errorf("alternative text %q", got)
	}
	_, xmp := p.find(t, `(?s)/Subtype /XML .*<dc:source>([^<]*)<`)
	if xmp[1] != s.Provenance {
		t.Errorf("provenance %q", xmp[1])
	}
	for _, want := range []string{"/Title (Sample figure <A & B>)", "/Subject (Test of the writers)", "/Keywords (test, figure)", "/Producer (test)"} {
		p.find(t, regexp.QuoteMeta(want))
	}
	if !regexp.MustCompile(`/ID \[<[0-9A-F]{32}> <[0-9A-F]{32}>\]`).MatchString(p.trailer) {
		t.Errorf("trailer %s", p.trailer)
	}
}

func fromUTF16(t *testing.T, hex string) string {
	t.Helper()
	var u []uint16
	for i := 0; i+4 <= len(hex); i += 4 {
		v, err := strconv.ParseUint(hex[i:i+4], 16, 16)
		if err != nil {
			t.Fatal(err)
		}
		u = append(u, uint16(v))
	}
	return string(utf16.Decode(u))
}

// fontOf returns the character map of a page font and checks its parts.
func (p parsedPDF) fontOf(t *testing.T, n int) map[string]string {
	t.Helper()
	m := regexp.MustCompile(`/BaseFont /([A-Z]{6})\+LiberationSans\S* /Encoding /Identity-H /DescendantFonts \[(\d+) 0 R\] /ToUnicode (\d+) 0 R`).
		FindStringSubmatch(string(p.objects[n]))
	if m == nil {
		t.Fatalf("font object %s", p.objects[n])
	}
	desc := regexp.MustCompile(`/FontDescriptor (\d+) 0 R /CIDToGIDMap /Identity`).FindSubmatch(p.objects[number(t, m[2])])
	file := regexp.MustCompile(`/FontFile2 (\d+) 0 R`).FindSubmatch(p.objects[number(t, string(desc[1]))])
	program := p.inflate(t, number(t, string(file[1])))
	if !bytes.Contains(p.objects[number(t, string(file[1]))], fmt.Appendf(nil, "/Length1 %d ", len(program))) {
		t.Error("Length1 is not the length of the font file")
	}
	if checksum(program) != 0xB1B0AFBA {
		t.Error("damaged font file")
	}
	chars := make(map[string]string)
	for _, e := range regexp.MustCompile(`<([0-9A-F]{4})> <([0-9A-F]{4})>\n`).FindAllSubmatch(p.inflate(t, number(t, m[3])), -1) {
		if string(e[2]) != "FFFF" {
			chars[string(e[1])] = fromUTF16(t, string(e[2]))
		}
	}
	return chars
}

// Decoding the page's text with its own character maps gives every label in
// drawing order.
func TestPDFTextReadsAsLabels(t *testing.T) {
	s := sampleScene()
	p := parsePDF(t, mustWrite(t, s, "pdf", Options{}))
	_, page := p.find(t, `/Type /Page .*/Contents (\d+) 0 R /Resources << /Font << (.*?)>> >>`)
	fonts := make(map[string]map[string]string)
	for _, f := range regexp.MustCompile(`/(F\d) (\d+) 0 R`).FindAllStringSubmatch(page[2], -1) {
		fonts[f[1]] = p.fontOf(t, number(t, f[2]))
	}
	var want, got []string
	for _, l := range s.Layers {
		for _, it := range l.Items {
			if x, ok := it.(*TextItem); ok {
				want = append(want, x.plain())
			}
		}
	}
	font, label := "", ""
	for line := range strings.Lines(string(p.inflate(t, number(t, page[1])))) {
		line = strings.TrimSpace(line)
		switch {
		case line == "BT":
			label = ""
		case line == "ET":
			got = append(got, label)
		case strings.HasSuffix(line, " Tf"):
			font = line[1:3]
		case strings.HasSuffix(line, " TJ"):
			for _, h := range regexp.MustCompile(`<([0-9A-F]*)>`).FindAllStringSubmatch(line, -1) {
				for i := 0; i+4 <= len(h[1]); i += 4 {
					label += fonts[font][h[1][i:i+4]]
				}
			}
		}
	}
	if len(fonts) != 3 || len(want) < 100 || strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("%d fonts, labels %q\nwant %q", len(fonts), got, want)
	}
}

func TestPDFTextStrings(t *testing.T) {
	cases := []struct{ in, want string }{
		{"plain", "(plain)"},
		{`a(b)\c`, `(a\(b\)\\c)`},
		{"two\nlines", `(two\nlines)`},
		{"β", "<FEFF03B2>"},
	}
	for _, c := range cases {
		if got := pdfText(c.in); got != c.want {
			t.Errorf("%q: %s, want %s", c.in, got, c.want)
		}
	}
}

func TestNumbersAreShort(t *testing.T) {
	cases := []struct {
		v    float64
		prec int
		want string
	}{{0, 3, "0"}, {-0.0001, 3, "0"}, {1.5, 3, "1.5"}, {100, 3, "100"}, {100, 0, "100"}, {-2.3456, 2, "-2.35"}, {1e-7, 4, "0"}, {123456.789, 1, "123456.8"}}
	for _, c := range cases {
		if got := pdfNumber(c.v, c.prec); got != c.want {
			t.Errorf("%g to %d: %s, want %s", c.v, c.prec, got, c.want)
		}
	}
}

// The font program of a page must be readable by another font reader, with
// the widths the page states.
func TestPDFFontProgram(t *testing.T) {
	s := mustSubset(t, Bold, "CaAl2Si2O8 Å")
	f, err := font.ParseEmbeddedSFNT(s.truetype(false), 0)
	if err != nil {
		t.Fatal(err)
	}
	if len(s.runes) != 11 || int(f.NumGlyphs()) != len(s.gids) || len(s.gids) <= 1+len(s.runes) {
		t.Errorf("%d characters, %d glyphs of %d: Å needs its parts", len(s.runes), f.NumGlyphs(), len(s.gids))
	}
	for i := range s.gids {
		if w := float64(f.GlyphAdvance(uint16(i))) * 1000 / 2048; math.Abs(w-s.advance(i)) > 1e-9 {
			t.Errorf("glyph %d is %g wide, stated %g", i, w, s.advance(i))
		}
	}
}
