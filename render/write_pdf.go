package render

import (
	"bytes"
	"fmt"
	"io"
)

// writePDF writes the scene as a one-page PDF 1.7 file: the page box is the
// figure, fonts are embedded TrueType subsets with their characters, and the
// page is tagged as one figure with its text equivalent.
func writePDF(w io.Writer, s *Scene, subs []*subset, m metadata) error {
	f := newPDFFile()
	catalog, pages, page, figure, doc, tree := f.alloc(), f.alloc(), f.alloc(), f.alloc(), f.alloc(), f.alloc()
	box := fmt.Sprintf("[0 0 %s %s]", pdfNumber(s.Width*pointPerMM, 5), pdfNumber(s.Height*pointPerMM, 5))
	drawing, marks := pdfContent(s, subs)
	content := f.stream("", drawing)
	var fonts bytes.Buffer
	for i, sub := range subs {
		fmt.Fprintf(&fonts, "/F%d %d 0 R ", i, f.font(sub))
	}
	xmp := f.rawStream("/Type /Metadata /Subtype /XML", xmpPacket(m))
	f.set(catalog, fmt.Sprintf("<< /Type /Catalog /Pages %d 0 R /Lang (en) /MarkInfo << /Marked true >>"+
		" /StructTreeRoot %d 0 R /Metadata %d 0 R%s >>", pages, tree, xmp, viewerPreferences(m)))
	f.set(pages, fmt.Sprintf("<< /Type /Pages /Kids [%d 0 R] /Count 1 >>", page))
	f.set(page, fmt.Sprintf("<< /Type /Page /Parent %d 0 R /MediaBox %s /CropBox %s /TrimBox %s /Contents %d 0 R"+
		" /Resources << /Font << %s>> >> /StructParents 0 /Tabs /S >>", pages, box, box, box, content, fonts.Bytes()))
	var owners, stretches bytes.Buffer
	for i := range marks {
		fmt.Fprintf(&owners, "%d 0 R ", figure)
		fmt.Fprintf(&stretches, "%d ", i)
	}
	f.set(tree, fmt.Sprintf("<< /Type /StructTreeRoot /K %d 0 R /ParentTree << /Nums [0 [%s]] >> /ParentTreeNextKey 1 >>",
		doc, bytes.TrimSpace(owners.Bytes())))
	f.set(doc, fmt.Sprintf("<< /Type /StructElem /S /Document /P %d 0 R /K %d 0 R >>", tree, figure))
	f.set(figure, fmt.Sprintf("<< /Type /StructElem /S /Figure /P %d 0 R /Pg %d 0 R /K [%s] /Alt %s"+
		" /A << /O /Layout /Placement /Block /BBox %s >> >>", doc, page, bytes.TrimSpace(stretches.Bytes()), pdfText(m.alternative()), box))
	info := f.add(pdfInfo(m))
	return f.writeTo(w, catalog, info)
}

func viewerPreferences(m metadata) string {
	if m.title == "" {
		return ""
	}
	return " /ViewerPreferences << /DisplayDocTitle true >>"
}

// pdfInfo is the document information dictionary; its entries repeat the XMP.
func pdfInfo(m metadata) string {
	var b bytes.Buffer
	b.WriteString("<<")
	for _, e := range []struct{ key, value string }{
		{"Title", m.title}, {"Subject", m.subject}, {"Keywords", m.keywords},
		{"Creator", m.producer}, {"Producer", m.producer}, {"Provenance", m.provenance},
	} {
		if e.value != "" {
			fmt.Fprintf(&b, " /%s %s", e.key, pdfText(e.value))
		}
	}
	if !m.date.IsZero() {
		d := m.date.Format("20060102150405") + "Z"
		fmt.Fprintf(&b, " /CreationDate (D:%s) /ModDate (D:%s)", d, d)
	}
	b.WriteString(" >>")
	return b.String()
}

// xmpPacket wraps the metadata as the read-only packet of ISO 16684-1.
func xmpPacket(m metadata) []byte {
	return []byte("<?xpacket begin=\"\uFEFF\" id=\"W5M0MpCehiHzreSzNTczkc9d\"?>\n" +
		`<x:xmpmeta xmlns:x="adobe:ns:meta/">` + m.rdf() + "</x:xmpmeta>\n" + `<?xpacket end="r"?>`)
}

// font adds a subset as a composite font whose character codes are the
// subset's glyph numbers, and returns its object number.
func (f *pdfFile) font(s *subset) int {
	name := subsetTag(s) + "+" + s.face.name
	file := s.truetype(false)
	fileID := f.stream(fmt.Sprintf("/Length1 %d", len(file)), file)
	t, em := s.face.sfnt, func(units int16) string { return pdfNumber(float64(units)*1000/s.face.upem, 0) }
	flags, angle, stem := 1<<5, t.Post.ItalicAngle, 80 // nonsymbolic
	if angle != 0 {
		flags |= 1 << 6
	}
	if s.face.weight >= 700 {
		stem = 140
	}
	desc := f.add(fmt.Sprintf("<< /Type /FontDescriptor /FontName /%s /FontFamily (%s) /Flags %d"+
		" /FontBBox [%s %s %s %s] /ItalicAngle %s /Ascent %s /Descent %s /CapHeight %s /XHeight %s /StemV %d"+
		" /FontWeight %d /FontFile2 %d 0 R >>",
		name, fontFamily, flags, em(t.Head.XMin), em(t.Head.YMin), em(t.Head.XMax), em(t.Head.YMax),
		pdfNumber(angle, 1), em(t.Hhea.Ascender), em(t.Hhea.Descender), em(t.OS2.SCapHeight), em(t.OS2.SxHeight), stem,
		s.face.weight, fileID))
	var widths bytes.Buffer
	for i := range s.gids {
		widths.WriteString(pdfNumber(s.advance(i), 4) + " ")
	}
	cid := f.add(fmt.Sprintf("<< /Type /Font /Subtype /CIDFontType2 /BaseFont /%s"+
		" /CIDSystemInfo << /Registry (Adobe) /Ordering (Identity) /Supplement 0 >>"+
		" /FontDescriptor %d 0 R /CIDToGIDMap /Identity /DW 0 /W [0 [%s]] >>", name, desc, bytes.TrimSpace(widths.Bytes())))
	unicode := f.stream("", toUnicode(s))
	return f.add(fmt.Sprintf("<< /Type /Font /Subtype /Type0 /BaseFont /%s /Encoding /Identity-H"+
		" /DescendantFonts [%d 0 R] /ToUnicode %d 0 R >>", name, cid, unicode))
}

// toUnicode is the CMap from character codes to the characters they show.
func toUnicode(s *subset) []byte {
	var b bytes.Buffer
	b.WriteString("/CIDInit /ProcSet findresource begin\n12 dict begin\nbegincmap\n" +
		"/CIDSystemInfo << /Registry (Adobe) /Ordering (UCS) /Supplement 0 >> def\n" +
		"/CMapName /Adobe-Identity-UCS def\n/CMapType 2 def\n" +
		"1 begincodespacerange\n<0000> <FFFF>\nendcodespacerange\n")
	for at := 0; at < len(s.runes); at += 100 { // at most 100 entries a block
		block := s.runes[at:min(at+100, len(s.runes))]
		fmt.Fprintf(&b, "%d beginbfchar\n", len(block))
		for i, r := range block {
			fmt.Fprintf(&b, "<%04X> <%04X>\n", at+i+1, r)
		}
		b.WriteString("endbfchar\n")
	}
	b.WriteString("endcmap\nCMapName currentdict /CMap defineresource pop\nend\nend\n")
	return b.Bytes()
}
