package main

import (
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// redraw writes the gallery anew: go test ./cmd/thalweg -run Gallery -gallery
var redraw = flag.Bool("gallery", false, "write the figures of the gallery instead of comparing with them")

// galleryDir holds the figures that README shows.
const galleryDir = "../../testdata/gallery"

// gallery draws a figure and compares it, by geometry and words, with the one that is
// kept. It returns "as kept", or what is different.
func gallery(name string, args ...string) string {
	kept := filepath.Join(galleryDir, name)
	if *redraw {
		code, _, errText := run(append(args, "--figure", kept, "--quiet")...)
		if code != exitDone {
			return errText
		}
		os.Remove(captionPath(kept))
		return "as kept"
	}
	dir, err := os.MkdirTemp("", "gallery")
	if err != nil {
		return err.Error()
	}
	defer os.RemoveAll(dir)
	path := filepath.Join(dir, name)
	if code, _, errText := run(append(args, "--figure", path, "--quiet")...); code != exitDone {
		return errText
	}
	a, err := os.ReadFile(kept)
	if err != nil {
		return err.Error()
	}
	b, err := os.ReadFile(path)
	if err != nil {
		return err.Error()
	}
	return sameDrawing(string(a), string(b))
}

var (
	drawnAt   = regexp.MustCompile(` (?:d|x|y|transform|viewBox|width|height)="([^"]*)"`)
	drawnText = regexp.MustCompile(`>([^<>]+)</(?:text|tspan)>`)
	numeral   = regexp.MustCompile(`-?[0-9]+\.?[0-9]*(?:e-?[0-9]+)?`)
)

// sameDrawing compares the coordinates and words of two SVG figures.
func sameDrawing(a, b string) string {
	wa, wb := wordsIn(drawnText, a), wordsIn(drawnText, b)
	if wa != wb {
		return "the words differ"
	}
	pa, pb := drawnAt.FindAllStringSubmatch(a, -1), drawnAt.FindAllStringSubmatch(b, -1)
	if len(pa) != len(pb) {
		return fmt.Sprintf("%d shapes and words where %d are kept", len(pb), len(pa))
	}
	for i := range pa {
		na, nb := numeral.FindAllString(pa[i][1], -1), numeral.FindAllString(pb[i][1], -1)
		if len(na) != len(nb) {
			return fmt.Sprintf("shape %d has %d coordinates where %d are kept", i, len(nb), len(na))
		}
		for k := range na {
			u, _ := strconv.ParseFloat(na[k], 64)
			v, _ := strconv.ParseFloat(nb[k], 64)
			if math.Abs(u-v) > 0.02 {
				return fmt.Sprintf("shape %d lies at %g where %g is kept", i, v, u)
			}
		}
	}
	return "as kept"
}

func wordsIn(re *regexp.Regexp, s string) string {
	var out []string
	for _, m := range re.FindAllStringSubmatch(s, -1) {
		out = append(out, m[1])
	}
	return strings.Join(out, "\n")
}

// A moved line is noticed.
func TestGalleryNoticesChanges(t *testing.T) {
	svg := `<path d="M1 2 L3 4"/><text x="1" y="2">a</text>`
	for _, other := range []string{`<path d="M1 2 L3 4.1"/><text x="1" y="2">a</text>`, `<path d="M1 2 L3 4"/><text x="1" y="2">b</text>`, `<path d="M1 2"/><text x="1" y="2">a</text>`} {
		if sameDrawing(svg, svg) != "as kept" || sameDrawing(svg, other) == "as kept" {
			t.Errorf("no difference noticed in %s", other)
		}
	}
}

func ExampleNewCmdDescend() {
	fmt.Println(gallery("path.svg", "descend", "di-ab-an", "--bulk", "Di=30,Ab=35,An=35", "--mode", "fractional"))
	// Output: as kept
}

func ExampleNewCmdLiquidus() {
	fmt.Println(gallery("projection.svg", "liquidus", "fo-an-silica", "--style", "double-174"))
	// Output: as kept
}

func ExampleNewCmdSection() {
	fmt.Println(gallery("sections.svg", "section", "di-ab-an", "--at", "1300,1250,1200"))
	// Output: as kept
}

func ExampleNewCmdJoin() {
	fmt.Println(gallery("join.svg", "join", "fo-an-silica", "--from", "Fo=100", "--to", "Silica=100", "--style", "single-84"))
	// Output: as kept
}

func ExampleNewCmdDraw() {
	fmt.Println(gallery("plate.svg", "draw", filepath.Join(galleryDir, "plate.toml")))
	// Output: as kept
}
