package render

import (
	"bytes"
	"errors"
	"fmt"
	"hash/crc32"
	"reflect"
	"strings"
	"testing"
)

// sampleOrigin is invented; its words need quoting in XML, in PDF and in a shell.
func sampleOrigin() *Origin {
	return &Origin{
		Program: "thalweg", Version: "v9.9 <&>",
		Command: []string{"descend", "own system.toml", "--bulk", `A="1", B='2'`, "--shade", "π → (α) \\ ]]> -->"},
		Inputs:  []Input{{"system", "own system.toml", strings.Repeat("0f", 32)}, {"samples", "../rows.csv", strings.Repeat("a1", 32)}},
		Sources: []string{"An Author 1999, J. Invent. 1, 1–2; “quoted” & <marked>"},
	}
}

func withOrigin(o *Origin) *Scene {
	s := sampleScene()
	s.Origin = o
	return s
}

func TestOriginComesBack(t *testing.T) {
	for _, epoch := range []string{"", "1000000000"} {
		t.Setenv("SOURCE_DATE_EPOCH", epoch)
		want := *sampleOrigin()
		want.Epoch = epoch
		for _, format := range Formats() {
			r, err := ReadOrigin(mustWrite(t, withOrigin(sampleOrigin()), format, Options{DPI: 50}))
			if err != nil {
				t.Errorf("%s: %v", format, err)
				continue
			}
			if !reflect.DeepEqual(r.Origin, want) || r.Format != format || r.Changed {
				t.Errorf("%s: %+v", format, r)
			}
		}
	}
}

// The properties that file managers and image viewers show hold the origin in
// words.
func TestOriginInWords(t *testing.T) {
	o := sampleOrigin()
	o.Command = []string{"descend", "own system.toml"}
	for format, want := range map[string]string{
		"pdf": "/Provenance ", "svg": "<dc:source>made by a test from invented numbers; made by thalweg", "png": "Source\x00",
	} {
		b := mustWrite(t, withOrigin(o), format, Options{DPI: 50})
		if !bytes.Contains(b, []byte(want)) {
			t.Errorf("%s: no %q", format, want)
		}
	}
	if w := o.words("made from " + o.Inputs[0].SHA256); strings.Contains(w, o.Inputs[0].SHA256) || !strings.Contains(w, o.Inputs[1].SHA256) {
		t.Errorf("the inputs not named before are not those in %q", w)
	}
	if got, want := o.CommandLine("a b.pdf"), "thalweg descend 'own system.toml' --figure 'a b.pdf'"; got != want {
		t.Errorf("%s, want %s", got, want)
	}
	if got, want := shellWord("it's"), `'it'\''s'`; got != want {
		t.Errorf("%s, want %s", got, want)
	}
}

// No cut of a file is taken for a whole one, and no changed byte goes unnoticed,
// save in the parts that the seal itself is made of.
func TestDamageIsNoticed(t *testing.T) {
	for _, format := range Formats() {
		whole := mustWrite(t, withOrigin(sampleOrigin()), format, Options{DPI: 50})
		if n := len(whole) - len(bytes.TrimRight(whole, "\n")); n > 1 {
			t.Fatalf("%s ends in %d line feeds", format, n)
		}
		for _, n := range []int{0, 5, 40, len(whole) / 3, len(whole) / 2, len(whole) - 30} {
			r, err := ReadOrigin(whole[:n])
			var re *ReadError
			if !errors.As(err, &re) && !(err == nil && r.Changed) {
				t.Errorf("%s cut to %d bytes: %v", format, n, err)
			}
		}
		for at := 0; at < len(whole)-200; at += len(whole)/150 + 1 {
			b := bytes.Clone(whole)
			b[at] ^= 1
			if r, err := ReadOrigin(b); err == nil && !r.Changed {
				t.Errorf("%s: byte %d changed unnoticed", format, at)
			}
		}
	}
}

func TestReaderIsStrict(t *testing.T) {
	good := sampleOrigin()
	text, err := good.record()
	if err != nil {
		t.Fatal(err)
	}
	svg := func(record string) []byte {
		return []byte(`<svg xmlns:thalweg="` + recordSpace + `"><metadata>` + record + `</metadata></svg>`)
	}
	element := func(text string) string { return "<thalweg:origin>" + escape(text) + "</thalweg:origin>" }
	if r, err := ReadOrigin(svg(element(text))); err != nil || !r.Changed {
		t.Fatalf("a record without a seal: %v", err)
	}
	sum := strings.Repeat("0f", 32)
	for name, b := range map[string][]byte{
		"not JSON":            svg(element("thalweg")),
		"two objects":         svg(element(text + "{}")),
		"unknown key":         svg(element(strings.Replace(text, `"version"`, `"vision"`, 1))),
		"another form":        svg(element(strings.Replace(text, `"form":1`, `"form":2`, 1))),
		"two records":         svg(element(text) + element(text)),
		"element inside":      svg("<thalweg:origin>" + escape(text) + "<b/></thalweg:origin>"),
		"no command":          svg(element(`{"form":1,"program":"thalweg"}`)),
		"short hash":          svg(element(strings.Replace(text, sum, sum[2:], 1))),
		"absolute name":       svg(element(strings.Replace(text, "../rows.csv", "/rows.csv", 1))),
		"escape sequence":     svg(element(strings.Replace(text, "v9.9", `\u001b[31m`, 1))),
		"turned direction":    svg(element(strings.Replace(text, "v9.9", "\u202e", 1))),
		"larger than allowed": svg(element(strings.Replace(text, "v9.9", strings.Repeat("x", recordLargest), 1))),
		"long word":           svg(element(strings.Replace(text, "v9.9", strings.Repeat("x", recordWord+1), 1))),
		"foreign namespace":   []byte(`<svg xmlns:thalweg="urn:x"><thalweg:origin>` + escape(text) + `</thalweg:origin></svg>`),
		"entity":              []byte(`<!DOCTYPE svg [<!ENTITY a "b">]><svg>&a;</svg>`),
		"text before":         append([]byte("x"), svg(element(text))...),
	} {
		var re *ReadError
		if _, err := ReadOrigin(b); !errors.As(err, &re) || re.Remedy == "" {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestBadOriginIsNotWritten(t *testing.T) {
	for name, spoil := range map[string]func(*Origin){
		"no command":    func(o *Origin) { o.Command = nil },
		"line feed":     func(o *Origin) { o.Command[0] = "a\nb" },
		"absolute name": func(o *Origin) { o.Inputs[0].Name = "/home" },
		"no hash":       func(o *Origin) { o.Inputs[0].SHA256 = "" },
	} {
		o := sampleOrigin()
		spoil(o)
		if err := withOrigin(o).Write(&bytes.Buffer{}, "svg", Options{}); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// A chunk may name any length; the reader must not believe it.
func TestPNGChunksThatLie(t *testing.T) {
	chunk := func(n uint32, kind, data string) []byte {
		b := be.AppendUint32(nil, n)
		b = append(append(b, kind...), data...)
		return be.AppendUint32(b, crc32.ChecksumIEEE(b[4:]))
	}
	for name, b := range map[string][]byte{
		"too long":   chunk(0xFFFFFFFF, "iTXt", "abc"),
		"longer":     chunk(4, "iTXt", "abc"),
		"no end":     chunk(3, "iTXt", "abc"),
		"two ends":   append(chunk(0, "IEND", ""), chunk(0, "IEND", "")...),
		"no record":  chunk(0, "IEND", ""),
		"not a kind": {0, 0, 0, 0},
	} {
		var re *ReadError
		if _, err := ReadOrigin(append([]byte(pngSignature), b...)); !errors.As(err, &re) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// A picture that another program wrote anew, keeping the texts, is known for what
// it is.
func TestPNGWrittenAnew(t *testing.T) {
	whole := mustWrite(t, withOrigin(sampleOrigin()), "png", Options{DPI: 50})
	end := whole[len(whole)-12:]
	var more bytes.Buffer
	more.Write(whole[:len(whole)-12])
	appendChunk(&more, "tEXt", []byte("Comment\x00seen by someone"))
	more.Write(end)
	seal := bytes.Index(whole, []byte(sealKey)) - 8
	for name, b := range map[string][]byte{"with another text": more.Bytes(), "without its seal": append(bytes.Clone(whole[:seal]), end...)} {
		if r, err := ReadOrigin(b); err != nil || !r.Changed {
			t.Errorf("%s: %+v, %v", name, r, err)
		}
	}
}

func FuzzReadOrigin(f *testing.F) {
	for _, format := range Formats() {
		var b bytes.Buffer
		if err := withOrigin(sampleOrigin()).Write(&b, format, Options{DPI: 10}); err != nil {
			f.Fatal(err)
		}
		f.Add(b.Bytes())
	}
	f.Fuzz(func(t *testing.T, b []byte) {
		r, err := ReadOrigin(b)
		if err == nil {
			if text, err := r.record(); err != nil || !strings.Contains(text, fmt.Sprintf(`"form":%d`, recordForm)) {
				t.Errorf("what was read cannot be written: %v", err)
			}
		}
	})
}
