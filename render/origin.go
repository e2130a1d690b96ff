package render

import (
	"bytes"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"path"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Origin says what a figure was made from, so that it can be made again. It goes
// into the file in full, in a form that ReadOrigin gives back, and in words for
// those who look at the file's properties.
type Origin struct {
	Program string   // name of the command
	Version string   // of the program
	Command []string // arguments that make the figure, without the file it goes to
	Inputs  []Input  // what was read, the system first
	Sources []string // where the numbers of the system come from
	Epoch   string   // SOURCE_DATE_EPOCH in force, empty for none; set by the writers
}

// Input is a file, or a built-in system, that went into a figure.
type Input struct {
	Kind   string `json:"kind"`   // "system", "samples"
	Name   string `json:"name"`   // as on the command line
	SHA256 string `json:"sha256"` // of its bytes, hexadecimal
}

// Bounds of a record. A record beyond them is not one of this program's.
const (
	recordForm    = 1       // the form of the record described by originRecord
	recordLargest = 1 << 20 // bytes of JSON
	recordWords   = 1000    // arguments, inputs or sources
	recordWord    = 1 << 14 // bytes of one of them
)

// originRecord is an Origin as written: one JSON object.
type originRecord struct {
	Form    int      `json:"form"`
	Program string   `json:"program"`
	Version string   `json:"version"`
	Command []string `json:"command"`
	Inputs  []Input  `json:"inputs"`
	Sources []string `json:"sources"`
	Epoch   string   `json:"source_date_epoch,omitempty"`
}

// record writes the origin as JSON, after the check that its reader makes.
func (o Origin) record() (string, error) {
	if err := o.check(); err != nil {
		return "", fmt.Errorf("the record of the figure's origin: %w", err)
	}
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(originRecord{recordForm, o.Program, o.Version, o.Command, o.Inputs, o.Sources, o.Epoch}); err != nil {
		return "", err
	}
	return strings.TrimSpace(b.String()), nil
}

// parseOrigin reads a record: one object with the known keys and nothing else.
func parseOrigin(text string) (Origin, error) {
	if len(text) > recordLargest {
		return Origin{}, fmt.Errorf("it is larger than %d KiB", recordLargest>>10)
	}
	var r originRecord
	d := json.NewDecoder(strings.NewReader(text))
	d.DisallowUnknownFields()
	if err := d.Decode(&r); err != nil {
		return Origin{}, fmt.Errorf("it is not the expected JSON: %w", err)
	}
	if d.More() {
		return Origin{}, errors.New("something follows its JSON object")
	}
	if r.Form != recordForm {
		return Origin{}, fmt.Errorf("its form is %d, and only form %d is known", r.Form, recordForm)
	}
	o := Origin{r.Program, r.Version, r.Command, r.Inputs, r.Sources, r.Epoch}
	return o, o.check()
}

// check refuses what the program never writes. Figures come from elsewhere, and
// what they say is shown on a terminal and offered as a command: control and
// direction characters could make it look like something else.
func (o Origin) check() error {
	if o.Program == "" || len(o.Command) == 0 {
		return errors.New("it names no command")
	}
	if len(o.Command) > recordWords || len(o.Inputs) > recordWords || len(o.Sources) > recordWords {
		return fmt.Errorf("one of its lists has more than %d items", recordWords)
	}
	all := append([]string{o.Program, o.Version, o.Epoch}, o.Command...)
	all = append(all, o.Sources...)
	for _, in := range o.Inputs {
		if sum, err := hex.DecodeString(in.SHA256); err != nil || len(sum) != 32 {
			return fmt.Errorf("the SHA-256 of %q is not one", in.Name)
		}
		if in.Kind == "" || in.Name == "" || path.IsAbs(in.Name) {
			return fmt.Errorf("the input %q has no kind or no relative name", in.Name)
		}
		all = append(all, in.Kind, in.Name)
	}
	for _, s := range all {
		if len(s) > recordWord {
			return fmt.Errorf("a text in it is longer than %d bytes", recordWord)
		}
		if !utf8.ValidString(s) || strings.ContainsFunc(s, unprintable) {
			return fmt.Errorf("%q holds characters that cannot be shown", s)
		}
	}
	return nil
}

// unprintable are the control, formatting and private characters.
func unprintable(r rune) bool { return r != ' ' && !unicode.IsGraphic(r) }

// CommandLine is the command that makes the figure again, for a POSIX shell, with
// figure as the file it goes to.
func (o Origin) CommandLine(figure string) string {
	var b strings.Builder
	if o.Epoch != "" {
		b.WriteString("SOURCE_DATE_EPOCH=" + shellWord(o.Epoch) + " ")
	}
	b.WriteString(shellWord(o.Program))
	for _, a := range o.Command {
		b.WriteString(" " + shellWord(a))
	}
	if figure != "" {
		b.WriteString(" --figure " + shellWord(figure))
	}
	return b.String()
}

// shellWord quotes a word where a shell would not take it as it is.
func shellWord(s string) string {
	plain := func(r rune) bool {
		return 'a' <= r && r <= 'z' || 'A' <= r && r <= 'Z' || isDigit(r) || strings.ContainsRune("-_./=,:+@%", r)
	}
	if s != "" && strings.IndexFunc(s, func(r rune) bool { return !plain(r) }) < 0 {
		return s
	}
	return "'" + strings.ReplaceAll(s, "'", `'\''`) + "'"
}

// words is the origin for those who read the file's properties, without the inputs
// that the text before it names.
func (o Origin) words(before string) string {
	out := []string{"made by " + o.Program + " " + o.Version + " with: " + o.CommandLine("")}
	for _, in := range o.Inputs {
		if !strings.Contains(before, in.SHA256) {
			out = append(out, in.Kind+" "+in.Name+", SHA-256 "+in.SHA256)
		}
	}
	if len(o.Sources) > 0 {
		out = append(out, "data from: "+strings.Join(o.Sources, " | "))
	}
	return strings.Join(out, "; ")
}
