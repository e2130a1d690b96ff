package render

import (
	"bytes"
	"compress/zlib"
	"crypto/sha256"
	"fmt"
	"io"
	"slices"
	"strings"
	"unicode/utf16"
)

// pdfFile collects numbered objects and writes them with their index.
type pdfFile struct {
	objects [][]byte // object n at n-1
}

func newPDFFile() *pdfFile { return &pdfFile{} }

// alloc reserves the next object number.
func (f *pdfFile) alloc() int {
	f.objects = append(f.objects, nil)
	return len(f.objects)
}

// set gives a reserved object its body.
func (f *pdfFile) set(n int, body string) { f.objects[n-1] = []byte(body) }

// add appends an object and returns its number.
func (f *pdfFile) add(body string) int {
	n := f.alloc()
	f.set(n, body)
	return n
}

// stream adds a compressed stream with extra dictionary entries.
func (f *pdfFile) stream(entries string, data []byte) int {
	var z bytes.Buffer
	zw := zlib.NewWriter(&z) // writing to memory cannot fail
	zw.Write(data)
	zw.Close()
	return f.rawStream(strings.TrimSpace(entries+" /Filter /FlateDecode"), z.Bytes())
}

// rawStream adds a stream as it is.
func (f *pdfFile) rawStream(entries string, data []byte) int {
	var b bytes.Buffer
	fmt.Fprintf(&b, "<< %s /Length %d >>\nstream\n", entries, len(data))
	b.Write(data)
	b.WriteString("\nendstream")
	return f.add(b.String())
}

// writeTo writes the file. Its identifier is a hash of everything before it, so
// equal figures have equal files, and a later change shows.
func (f *pdfFile) writeTo(w io.Writer, catalog, info int) error {
	var b bytes.Buffer
	b.WriteString("%PDF-1.7\n%\xE2\xE3\xCF\xD3\n")
	offsets := make([]int, len(f.objects))
	for i, body := range f.objects {
		offsets[i] = b.Len()
		fmt.Fprintf(&b, "%d 0 obj\n", i+1)
		b.Write(body)
		b.WriteString("\nendobj\n")
	}
	start := b.Len()
	fmt.Fprintf(&b, "xref\n0 %d\n0000000000 65535 f \n", len(offsets)+1)
	for _, at := range offsets {
		fmt.Fprintf(&b, "%010d 00000 n \n", at)
	}
	sum := sha256.Sum256(b.Bytes())
	fmt.Fprintf(&b, "trailer\n<< /Size %d /Root %d 0 R /Info %d 0 R /ID [<%X> <%X>] >>\nstartxref\n%d\n%%%%EOF\n",
		len(offsets)+1, catalog, info, sum[:16], sum[:16], start)
	_, err := w.Write(b.Bytes())
	return err
}

// pdfText writes a text string: as it is when plain ASCII, else in UTF-16.
func pdfText(s string) string {
	if strings.IndexFunc(s, func(r rune) bool { return r < ' ' && r != '\n' || r > '~' }) < 0 {
		return "(" + strings.NewReplacer(`\`, `\\`, "(", `\(`, ")", `\)`, "\n", `\n`).Replace(s) + ")"
	}
	return fmt.Sprintf("<FEFF%X>", appendWords(nil, utf16.Encode([]rune(s))))
}

func pdfNumber(v float64, prec int) string { return string(appendNumber(nil, v, prec)) }

// subsetTag is the six letters that tell subsets of one font apart, from a
// hash of the characters.
func subsetTag(s *subset) string {
	sum := sha256.Sum256([]byte(s.face.name + string(s.runes)))
	tag := slices.Clone(sum[:6])
	for i := range tag {
		tag[i] = 'A' + tag[i]%26
	}
	return string(tag)
}
