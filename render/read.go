package render

import (
	"bytes"
	"crypto/sha256"
	"encoding/xml"
	"errors"
	"fmt"
	"hash/crc32"
	"io"
	"strings"
)

// Reading is what a figure's file says about itself.
type Reading struct {
	Origin
	Format  string // pdf, svg or png
	Changed bool   // the file was changed after it was written
}

// ReadError says why a file tells nothing about a figure's origin.
type ReadError struct {
	What   string
	Remedy string
	Err    error // cause, if another error is behind it
}

func (e *ReadError) Error() string {
	s := e.What
	if e.Err != nil {
		s += " (" + e.Err.Error() + ")"
	}
	return s + "; " + e.Remedy
}

// Unwrap returns the cause.
func (e *ReadError) Unwrap() error { return e.Err }

// errNoRecord says that a file is whole but holds no record of ours.
var errNoRecord = errors.New("it holds no record of how it was made")

// ReadOrigin reads the origin from a figure's file, whose bytes tell the format.
// It keeps no more than the record beside the bytes, follows no reference in the
// file, and decompresses nothing. It reports a ReadError for a file that is no
// figure, is damaged, or holds no record.
func ReadOrigin(file []byte) (*Reading, error) {
	for _, f := range []struct {
		name, start string
		read        func([]byte) (record string, changed bool, err error)
	}{
		{"pdf", "%PDF-", readPDF}, {"png", pngSignature, readPNG}, {"svg", "<?xml", readSVG}, {"svg", "<svg", readSVG},
	} {
		if !bytes.HasPrefix(file, []byte(f.start)) {
			continue
		}
		text, changed, err := f.read(file)
		switch {
		case errors.Is(err, errNoRecord):
			return nil, &ReadError{What: err.Error(), Err: nil,
				Remedy: "either another program made this " + f.name + " file, or one that changed it has dropped the record"}
		case err != nil:
			return nil, &ReadError{What: "this " + f.name + " file is damaged", Err: err, Remedy: "take another copy of it"}
		}
		o, err := parseOrigin(text)
		if err != nil {
			return nil, &ReadError{What: "its record of how it was made cannot be read", Err: err,
				Remedy: "use the version of the program that made it, or another copy of the file"}
		}
		return &Reading{o, f.name, changed}, nil
	}
	return nil, &ReadError{What: "this is no figure: its content is neither pdf, svg nor png", Remedy: "name a figure that this program made"}
}

// readPDF finds the packet of metadata, which the writer leaves uncompressed, and
// compares the file's identifier with the hash that it is.
func readPDF(b []byte) (record string, changed bool, err error) {
	if !bytes.Contains(b[max(0, len(b)-1024):], []byte("%%EOF")) {
		return "", false, errors.New("its end is missing")
	}
	_, rest, ok := bytes.Cut(b, []byte("<?xpacket begin="))
	if !ok {
		return "", false, errNoRecord
	}
	_, rest, ok = bytes.Cut(rest, []byte("?>"))
	packet, _, end := bytes.Cut(rest, []byte("<?xpacket end="))
	if !ok || !end {
		return "", false, errors.New("its packet of metadata has no end")
	}
	record, err = findRecord(packet)
	return record, !pdfIntact(b), err
}

// pdfIntact reports that the identifier is the hash of all that stands before it.
func pdfIntact(b []byte) bool {
	at := bytes.LastIndex(b, []byte("\ntrailer\n")) + 1
	if at == 0 {
		return false
	}
	sum := sha256.Sum256(b[:at])
	return bytes.Contains(b[at:], fmt.Appendf(nil, "/ID [<%X> <%X>] >>", sum[:16], sum[:16]))
}

// Names of the record: an XML element of our own namespace, and a PNG keyword.
const (
	recordSpace   = "urn:x-thalweg:figure"
	recordElement = "origin"
	recordKey     = "thalweg-origin"
	sealKey       = "thalweg-seal"
)

// readSVG reads the whole file as XML, and compares the seal at its end.
func readSVG(b []byte) (record string, changed bool, err error) {
	record, err = findRecord(b)
	return record, !svgSealed(b), err
}

// findRecord reads XML strictly to its end and returns the text of the one
// element that holds the record.
func findRecord(b []byte) (string, error) {
	d := xml.NewDecoder(bytes.NewReader(b))
	var text strings.Builder
	found, inside := 0, false
	for {
		tok, err := d.Token()
		if err == io.EOF {
			break
		}
		if err != nil {
			return "", err
		}
		switch t := tok.(type) {
		case xml.StartElement:
			if inside {
				return "", errors.New("its record holds further elements")
			}
			if t.Name.Space == recordSpace && t.Name.Local == recordElement {
				found, inside = found+1, true
			}
		case xml.EndElement:
			inside = false
		case xml.CharData:
			if inside {
				text.Write(t)
			}
		}
	}
	switch {
	case found == 0:
		return "", errNoRecord
	case found > 1:
		return "", errors.New("it holds more than one record")
	}
	return text.String(), nil
}

// svgSeal is the last line of an SVG: a hash of everything before it, by which a
// later change shows.
func svgSeal(before []byte) []byte {
	return fmt.Appendf(nil, "<!-- SHA-256 of all above: %s -->\n", hashHex(before))
}

func svgSealed(b []byte) bool {
	at := bytes.LastIndex(b, []byte("<!-- SHA-256"))
	return at >= 0 && bytes.Equal(b[at:], svgSeal(b[:at]))
}

const pngSignature = "\x89PNG\r\n\x1a\n"

// readPNG walks the chunks, each of which has its own check sum, and compares the
// seal that stands last.
func readPNG(b []byte) (record string, changed bool, err error) {
	found, sealed := 0, false
	for at := len(pngSignature); ; {
		if len(b)-at < 12 {
			return "", false, errors.New("its end is missing")
		}
		n := int64(be.Uint32(b[at:]))
		if n > int64(len(b)-at-12) {
			return "", false, errors.New("a chunk reaches past the end of the file")
		}
		start, body := at, b[at+4:at+8+int(n)]
		at += 12 + int(n)
		if be.Uint32(b[at-4:]) != crc32.ChecksumIEEE(body) {
			return "", false, fmt.Errorf("the check sum of chunk %q is wrong", body[:4])
		}
		switch kind, data := string(body[:4]), body[4:]; kind {
		case "iTXt":
			if text, ok := strings.CutPrefix(string(data[:min(len(data), recordLargest+64)]), recordKey+itxtPlain); ok {
				record, found = text, found+1
			}
			sealed = at == len(b)-12 && string(data) == sealKey+itxtPlain+hashHex(b[:start])
		case "IEND":
			switch {
			case at != len(b):
				return "", false, errors.New("something follows its end")
			case found == 0:
				return "", false, errNoRecord
			case found > 1:
				return "", false, errors.New("it holds more than one record")
			}
			return record, !sealed, nil
		}
	}
}

// hashHex is the SHA-256 of b in hexadecimal.
func hashHex(b []byte) string { return fmt.Sprintf("%x", sha256.Sum256(b)) }
