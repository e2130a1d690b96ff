package render

import (
	"bytes"
	"errors"
	"math"
	"runtime"
	"strings"
	"sync"
	"testing"
)

func mustWrite(t testing.TB, s *Scene, format string, o Options) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := s.Write(&b, format, o); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// Equal scenes give equal bytes: over repetitions, freshly built scenes,
// numbers of processors and writers at work side by side.
func TestSameBytesEveryTime(t *testing.T) {
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(0))
	o := Options{DPI: 100, Producer: "test"}
	for _, c := range []struct {
		format string
		o      Options
	}{{"pdf", o}, {"svg", o}, {"svg", Options{OutlineText: true}}, {"png", o}} {
		want := mustWrite(t, sampleScene(), c.format, c.o)
		shared := sampleScene()
		for i := range 20 {
			runtime.GOMAXPROCS(1 + i%4)
			if !bytes.Equal(mustWrite(t, shared, c.format, c.o), want) {
				t.Fatalf("%s: rendering %d differs", c.format, i)
			}
		}
		var wg sync.WaitGroup
		same := make([]bool, 4)
		for i := range same {
			wg.Go(func() { same[i] = bytes.Equal(mustWrite(t, shared, c.format, c.o), want) })
		}
		wg.Wait()
		for i := range same {
			if !same[i] {
				t.Errorf("%s: writer %d beside others differs", c.format, i)
			}
		}
	}
}

func TestDatesOnlyFromTheEnvironment(t *testing.T) {
	s := sampleScene()
	t.Setenv("SOURCE_DATE_EPOCH", "")
	if b := mustWrite(t, s, "pdf", Options{}); bytes.Contains(b, []byte("CreationDate")) || bytes.Contains(b, []byte("CreateDate")) {
		t.Error("a date without SOURCE_DATE_EPOCH")
	}
	t.Setenv("SOURCE_DATE_EPOCH", "1000000000") // 2001-09-09 01:46:40 UTC
	b := mustWrite(t, s, "pdf", Options{})
	for _, want := range []string{"/CreationDate (D:20010909014640Z)", "<xmp:CreateDate>2001-09-09T01:46:40Z<"} {
		if !bytes.Contains(b, []byte(want)) {
			t.Errorf("no %s", want)
		}
	}
	t.Setenv("SOURCE_DATE_EPOCH", "yesterday")
	if err := s.Write(&bytes.Buffer{}, "pdf", Options{}); err == nil || !strings.Contains(err.Error(), "SOURCE_DATE_EPOCH") {
		t.Errorf("bad date: %v", err)
	}
}

func TestMissingCharacterIsNamed(t *testing.T) {
	for _, format := range Formats() {
		s := NewScene(50, 50)
		s.Layer("labels").Text(TextItem{Runs: PlainRuns("A ⇌ B", 8, Regular), Label: "equilibrium"})
		var b bytes.Buffer
		err := s.Write(&b, format, Options{})
		var ge *GlyphError
		if !errors.As(err, &ge) || ge.Char != '⇌' || ge.Label != "equilibrium" || ge.Layer != "labels" {
			t.Errorf("%s: error %v", format, err)
			continue
		}
		for _, want := range []string{"⇌", "U+21CC", "equilibrium"} {
			if !strings.Contains(err.Error(), want) {
				t.Errorf("%s: %q does not name %s", format, err, want)
			}
		}
		if b.Len() > 0 {
			t.Errorf("%s: wrote %d bytes before failing", format, b.Len())
		}
	}
}

func TestControlCharactersAreRefused(t *testing.T) {
	for _, c := range []string{"\x00", "\t", "\n", "\r", "\u0085", "\U0001F600"} {
		s := NewScene(50, 50)
		s.Layer("labels").Text(TextItem{Runs: PlainRuns("a"+c, 8, Italic)})
		var ge *GlyphError
		if err := s.Write(&bytes.Buffer{}, "svg", Options{}); !errors.As(err, &ge) {
			t.Errorf("%q: error %v", c, err)
		}
	}
}

func TestBadGeometryIsRefused(t *testing.T) {
	nan := math.NaN()
	red := Hex("ff0000")
	cases := map[string]func(*Scene){
		"no width":   func(s *Scene) { s.Width = 0 },
		"nan height": func(s *Scene) { s.Height = nan },
		"huge":       func(s *Scene) { s.Height = 1e9 },
		"nan point": func(s *Scene) {
			s.Layer("a").Path(PathItem{Path: Polyline([]Point{{0, 0}, {nan, 1}}, false), Fill: &red, Role: "field"})
		},
		"inf dash": func(s *Scene) {
			s.Layer("a").Path(PathItem{Path: Polyline([]Point{{0, 0}, {1, 1}}, false),
				Stroke: &Stroke{Width: 1, Dash: []float64{math.Inf(1)}}})
		},
		"nan text":  func(s *Scene) { s.Layer("a").Text(TextItem{Runs: PlainRuns("x", 8, Regular), X: nan}) },
		"no size":   func(s *Scene) { s.Layer("a").Text(TextItem{Runs: PlainRuns("x", 0, Regular)}) },
		"nan angle": func(s *Scene) { s.Layer("a").Text(TextItem{Runs: PlainRuns("x", 8, Regular), Angle: nan}) },
	}
	for name, spoil := range cases {
		s := NewScene(50, 50)
		spoil(s)
		var ge *GeometryError
		if err := s.Write(&bytes.Buffer{}, "svg", Options{}); !errors.As(err, &ge) {
			t.Errorf("%s: error %v", name, err)
		}
	}
}

// failAfter takes n bytes, then fails.
type failAfter struct{ n int }

func (f *failAfter) Write(b []byte) (int, error) {
	if f.n -= len(b); f.n < 0 {
		return 0, errors.New("disk full")
	}
	return len(b), nil
}

func TestWriterErrorsAreReported(t *testing.T) {
	for _, format := range Formats() {
		if err := sampleScene().Write(&failAfter{10}, format, Options{DPI: 30}); err == nil {
			t.Errorf("%s: a failed write went unreported", format)
		}
	}
}

func TestEmptySceneIsAFigure(t *testing.T) {
	for _, format := range Formats() {
		if b := mustWrite(t, NewScene(10, 10), format, Options{}); len(b) == 0 {
			t.Errorf("%s: nothing written", format)
		}
	}
}
