package render

import (
	"encoding/xml"
	"fmt"
	"os"
	"strconv"
	"strings"
	"time"
)

// metadata is what every format says about the figure.
type metadata struct {
	title, description, subject, keywords, provenance, producer string

	origin string // the record that ReadOrigin reads, empty for none

	date time.Time // zero: none
}

// metadata collects the scene's metadata. The only date ever used is that of
// SOURCE_DATE_EPOCH (seconds since 1970, UTC).
func (s *Scene) metadata(o Options) (metadata, error) {
	m := metadata{
		title: clean(s.Title), description: clean(s.Description), subject: clean(s.Subject),
		keywords: clean(s.Keywords), provenance: clean(s.Provenance), producer: clean(o.Producer),
	}
	epoch := os.Getenv("SOURCE_DATE_EPOCH")
	if v := epoch; v != "" {
		sec, err := strconv.ParseInt(v, 10, 64)
		if err != nil || sec < 0 || sec > 253402300799 {
			return m, fmt.Errorf("SOURCE_DATE_EPOCH is %q: it must be whole seconds since 1970, or unset", v)
		}
		m.date = time.Unix(sec, 0).UTC()
	}
	if s.Origin == nil {
		return m, nil
	}
	origin := *s.Origin
	origin.Epoch = epoch
	words := clean(origin.words(m.provenance))
	if m.provenance != "" {
		words = m.provenance + "; " + words
	}
	m.provenance = words
	var err error
	m.origin, err = origin.record()
	return m, err
}

// clean drops what XML cannot hold: control characters other than tab and
// line feed, and broken UTF-8.
func clean(s string) string {
	return strings.Map(func(r rune) rune {
		if r < ' ' && r != '\t' && r != '\n' || r == 0xFFFE || r == 0xFFFF {
			return -1
		}
		return r
	}, strings.ToValidUTF8(s, "\uFFFD"))
}

// alternative is the text for readers who cannot see the figure.
func (m metadata) alternative() string {
	for _, s := range []string{m.description, m.title} {
		if s != "" {
			return s
		}
	}
	return "Figure"
}

// rdf returns the metadata as an RDF element for an XMP packet or an SVG.
func (m metadata) rdf() string {
	var b strings.Builder
	b.WriteString(`<rdf:RDF xmlns:rdf="http://www.w3.org/1999/02/22-rdf-syntax-ns#"` +
		` xmlns:dc="http://purl.org/dc/elements/1.1/" xmlns:pdf="http://ns.adobe.com/pdf/1.3/"` +
		` xmlns:xmp="http://ns.adobe.com/xap/1.0/"`)
	if m.origin != "" {
		fmt.Fprintf(&b, ` xmlns:thalweg="%s"`, recordSpace)
	}
	b.WriteString(`><rdf:Description rdf:about="">`)
	simple := func(tag, v string) {
		if v != "" {
			fmt.Fprintf(&b, "<%s>%s</%s>", tag, escape(v), tag)
		}
	}
	list := func(tag, kind, v string) {
		if v != "" {
			lang := ""
			if kind == "Alt" {
				lang = ` xml:lang="x-default"`
			}
			fmt.Fprintf(&b, "<%s><rdf:%s><rdf:li%s>%s</rdf:li></rdf:%s></%s>", tag, kind, lang, escape(v), kind, tag)
		}
	}
	list("dc:title", "Alt", m.title)
	list("dc:description", "Alt", m.subject)
	list("dc:language", "Bag", "en")
	simple("dc:source", m.provenance)
	simple("pdf:Keywords", m.keywords)
	simple("pdf:Producer", m.producer)
	simple("xmp:CreatorTool", m.producer)
	if !m.date.IsZero() {
		d := m.date.Format(time.RFC3339)
		simple("xmp:CreateDate", d)
		simple("xmp:ModifyDate", d)
	}
	simple("thalweg:"+recordElement, m.origin)
	b.WriteString("</rdf:Description></rdf:RDF>")
	return b.String()
}

// escape makes s safe as XML text or attribute value.
func escape(s string) string {
	var b strings.Builder
	xml.EscapeText(&b, []byte(s))
	return b.String()
}

// appendNumber appends v with at most prec decimals and no trailing zeros.
func appendNumber(b []byte, v float64, prec int) []byte {
	at := len(b)
	b = strconv.AppendFloat(b, v, 'f', prec, 64)
	if prec > 0 {
		for b[len(b)-1] == '0' {
			b = b[:len(b)-1]
		}
		if b[len(b)-1] == '.' {
			b = b[:len(b)-1]
		}
	}
	if string(b[at:]) == "-0" {
		b = append(b[:at], '0')
	}
	return b
}
