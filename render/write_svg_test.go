package render

import (
	"bytes"
	"encoding/base64"
	"encoding/xml"
	"io"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"golang.org/x/image/font/sfnt"
)

// element is one start tag of a parsed SVG with the text inside it.
type element struct {
	name   string
	parent string
	attr   map[string]string
	text   string
}

// parseSVG reads the whole file strictly and returns its elements in order.
func parseSVG(t *testing.T, b []byte) []*element {
	t.Helper()
	d := xml.NewDecoder(bytes.NewReader(b))
	var all, open []*element
	for {
		tok, err := d.Token()
		if err == io.EOF {
			return all
		}
		if err != nil {
			t.Fatal(err)
		}
		switch tok := tok.(type) {
		case xml.StartElement:
			e := &element{name: tok.Name.Local, attr: make(map[string]string)}
			for _, a := range tok.Attr {
				if _, twice := e.attr[a.Name.Local]; twice {
					t.Errorf("<%s> has %s twice", e.name, a.Name.Local)
				}
				e.attr[a.Name.Local] = a.Value
			}
			if len(open) > 0 {
				e.parent = open[len(open)-1].name
			}
			all, open = append(all, e), append(open, e)
		case xml.EndElement:
			open = open[:len(open)-1]
		case xml.CharData:
			for _, e := range open {
				e.text += string(tok)
			}
		}
	}
}

func named(all []*element, name string) []*element {
	var out []*element
	for _, e := range all {
		if e.name == name {
			out = append(out, e)
		}
	}
	return out
}

func TestSVGStructure(t *testing.T) {
	s := sampleScene()
	all := parseSVG(t, mustWrite(t, s, "svg", Options{Producer: "test"}))
	root := all[0].attr
	for key, want := range map[string]string{"width": "84mm", "height": "100mm", "viewBox": "0 0 84 100", "role": "img",
		"aria-labelledby": "figure-title figure-desc", "lang": "en"} {
		if root[key] != want {
			t.Errorf("%s is %q, want %q", key, root[key], want)
		}
	}
	if all[1].name != "title" || all[1].text != s.Title || all[2].name != "desc" || all[2].text != s.Description {
		t.Errorf("first children %s %q, %s %q", all[1].name, all[1].text, all[2].name, all[2].text)
	}
	if src := named(all, "source"); len(src) != 1 || src[0].text != s.Provenance {
		t.Errorf("provenance %v", src)
	}
	var ids []string
	for _, g := range named(all, "g") {
		ids = append(ids, g.attr["id"])
	}
	if got := strings.Join(ids, " "); got != "fields isotherms marks---points frame labels" {
		t.Errorf("layers %s", got)
	}
	if n := len(named(all, "path")); n != 201 {
		t.Errorf("%d paths, want 201", n)
	}
}

// Labels keep their text, and the stated lengths of their runs add up to the
// measured width.
func TestSVGText(t *testing.T) {
	s := sampleScene()
	all := parseSVG(t, mustWrite(t, s, "svg", Options{}))
	var items []*TextItem
	for _, it := range s.Layer("labels").Items {
		items = append(items, it.(*TextItem))
	}
	texts := named(all, "text")
	if len(texts) != len(items) || len(items) < 100 {
		t.Fatalf("%d text elements for %d labels", len(texts), len(items))
	}
	for i, e := range texts {
		if e.text != items[i].plain() {
			t.Errorf("label %q, want %q", e.text, items[i].plain())
		}
		if v := e.attr["textLength"]; v != "" {
			if w, _ := strconv.ParseFloat(v, 64); math.Abs(w-TextWidth(items[i].Runs)) > 1e-4 {
				t.Errorf("%q: length %s, measured %g", e.text, v, TextWidth(items[i].Runs))
			}
		}
	}
	rise, size := 0.0, 0.0
	for _, span := range named(all, "tspan")[:6] { // CaAl 2 Si 2 O 8
		dy, _ := strconv.ParseFloat("0"+span.attr["dy"], 64)
		if v, ok := span.attr["dy"]; ok {
			dy, _ = strconv.ParseFloat(v, 64)
		}
		rise -= dy
		size, _ = strconv.ParseFloat(span.attr["font-size"], 64)
	}
	if math.Abs(rise+0.16*9*mmPerPoint) > 1e-3 || math.Abs(size-0.75*9*mmPerPoint) > 1e-3 {
		t.Errorf("last subscript is %g mm high at %g mm", size, rise)
	}
}

func TestSVGFonts(t *testing.T) {
	b := mustWrite(t, sampleScene(), "svg", Options{})
	faces := regexp.MustCompile(`font-style:(\w+);font-weight:(\d+);src:url\(data:font/ttf;base64,([^)]*)\)`).FindAllSubmatch(b, -1)
	if len(faces) != 3 {
		t.Fatalf("%d embedded faces, want 3", len(faces))
	}
	for _, f := range faces {
		ttf, err := base64.StdEncoding.DecodeString(string(f[3]))
		if err != nil {
			t.Fatal(err)
		}
		if _, err := sfnt.Parse(ttf); err != nil {
			t.Errorf("%s %s: %v", f[1], f[2], err)
		}
	}
}

func TestSVGOutlines(t *testing.T) {
	b := mustWrite(t, sampleScene(), "svg", Options{OutlineText: true})
	all := parseSVG(t, b)
	if n := len(named(all, "text")); n != 0 || bytes.Contains(b, []byte("font-face")) {
		t.Errorf("%d text elements or fonts left", n)
	}
	found := false
	for _, p := range named(all, "path") {
		found = found || p.attr["aria-label"] == "CaAl2Si2O8"
	}
	if !found {
		t.Error("outlined labels do not say what they read")
	}
}

func TestLayerIDs(t *testing.T) {
	taken := make(map[string]bool)
	cases := []struct{ in, want string }{
		{"fields", "fields"}, {"fields", "fields-2"}, {"two words", "two-words"}, {"1 atm", "layer-1-atm"}, {"", "layer-"}, {"β", "layer--"},
	}
	for _, c := range cases {
		if got := layerID(c.in, taken); got != c.want {
			t.Errorf("%q: %s, want %s", c.in, got, c.want)
		}
	}
}
