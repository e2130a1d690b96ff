package render

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strings"
)

// Options tune the writers; the zero value is ready to use.
type Options struct {
	DPI         int    // png: pixels per inch, 0 means 300
	OutlineText bool   // svg: text as shapes, for programs that ignore embedded fonts
	Producer    string // program named in the metadata
}

// Formats lists the file formats Write knows, which are also the file endings
// WriteFile knows.
func Formats() []string { return []string{"pdf", "svg", "png"} }

// FormatError reports a file format that cannot be written.
type FormatError struct {
	Path   string // file asked for, empty when a format was asked for directly
	Format string
}

func (e *FormatError) Error() string {
	want := "use one of " + strings.Join(Formats(), ", ")
	switch {
	case e.Path == "":
		return fmt.Sprintf("unknown figure format %q: %s", e.Format, want)
	case e.Format == "":
		return fmt.Sprintf("%s: the file name has no ending to tell the format: %s", e.Path, want)
	}
	return fmt.Sprintf("%s: unknown figure format %q: %s", e.Path, e.Format, want)
}

// GlyphError reports a character that the built-in fonts cannot draw.
type GlyphError struct {
	Char  rune
	Label string
	Layer string
}

func (e *GlyphError) Error() string {
	return fmt.Sprintf("label %q (layer %s): the character %q (U+%04X) is not in the built-in font: replace it in the label",
		e.Label, e.Layer, e.Char, e.Char)
}

// GeometryError reports an item whose coordinates or sizes are not usable
// numbers, or a page without a size.
type GeometryError struct {
	Layer, Item string
}

func (e *GeometryError) Error() string {
	if e.Layer == "" {
		return "figure: " + e.Item
	}
	return fmt.Sprintf("figure layer %s: %s has a coordinate, size or width that cannot be drawn (not a number, or far off the page)", e.Layer, e.Item)
}

// Write writes the scene as "pdf", "svg" or "png". The same scene and options
// give the same bytes at any time on any machine, except that documents carry
// a date when SOURCE_DATE_EPOCH is set. Nothing is written to w unless the
// whole figure could be made.
func (s *Scene) Write(w io.Writer, format string, o Options) error {
	b, err := s.encode(format, o)
	if err != nil {
		return err
	}
	_, err = w.Write(b)
	return err
}

// encode returns the finished file. A panic in a library turns into an error.
func (s *Scene) encode(format string, o Options) (b []byte, err error) {
	defer func() {
		if r := recover(); r != nil {
			b, err = nil, fmt.Errorf("making the %s figure failed inside: %v", format, r)
		}
	}()
	if err := s.check(); err != nil {
		return nil, err
	}
	subs, err := s.subsets()
	if err != nil {
		return nil, err
	}
	meta, err := s.metadata(o)
	if err != nil {
		return nil, err
	}
	var buf bytes.Buffer
	switch format {
	case "pdf":
		err = writePDF(&buf, s, subs, meta)
	case "svg":
		err = writeSVG(&buf, s, subs, meta, o)
	case "png":
		err = writePNG(&buf, s, meta, o)
	default:
		err = &FormatError{Format: format}
	}
	return buf.Bytes(), err
}

// check refuses scenes that no format can express.
func (s *Scene) check() error {
	if !(s.Width > 0 && s.Height > 0 && s.Width <= 5000 && s.Height <= 5000) {
		return &GeometryError{Item: fmt.Sprintf("page of %g x %g mm: both sides must be above 0 and at most 5000 mm", s.Width, s.Height)}
	}
	for _, l := range s.Layers {
		for _, it := range l.Items {
			switch it := it.(type) {
			case *PathItem:
				if !it.finite() {
					return &GeometryError{Layer: l.Name, Item: "shape " + it.Role}
				}
			case *TextItem:
				if !it.finite() {
					return &GeometryError{Layer: l.Name, Item: fmt.Sprintf("label %q", it.label())}
				}
			}
		}
	}
	return nil
}

func finite(v ...float64) bool {
	for _, x := range v {
		if math.IsNaN(x) || math.Abs(x) > 1e6 {
			return false
		}
	}
	return true
}

func (p *PathItem) finite() bool {
	for _, q := range p.Path.pts {
		if !finite(q.X, q.Y) {
			return false
		}
	}
	return p.Stroke == nil || finite(p.Stroke.Width) && finite(p.Stroke.Dash...)
}

func (t *TextItem) finite() bool {
	for _, r := range t.Runs {
		if r.Text != "" && !(r.Size > 0 && finite(r.Size, r.Rise)) {
			return false
		}
	}
	return finite(t.X, t.Y, t.Angle)
}

// dashes returns the dash lengths as an even number of on, off lengths, or
// nil for a solid line.
func (s *Stroke) dashes() []float64 {
	sum := 0.0
	for _, d := range s.Dash {
		if d < 0 {
			return nil
		}
		sum += d
	}
	if sum == 0 {
		return nil
	}
	if len(s.Dash)%2 == 1 {
		return append(append([]float64(nil), s.Dash...), s.Dash...)
	}
	return s.Dash
}

// painted reports whether the stroke leaves a mark.
func (s *Stroke) painted() bool { return s != nil && s.Width > 0 }
