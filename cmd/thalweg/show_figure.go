package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"thalweg/render"
	"thalweg/systems"
)

// largestFigure is the size in bytes beyond which a figure is not read.
const largestFigure = 64 << 20

// isFigure reports that a name is that of a figure and not of a system.
func isFigure(name string) bool { return slices.Contains(figureFormats(), figureFormat(name)) }

// figureStory is what a figure says of itself, held against what is at hand.
type figureStory struct {
	*render.Reading
	path    string
	again   string // command line
	inputs  []heldInput
	version string // of the program at hand
	unknown string // why the program at hand does not take the command; empty if it does
}

// heldInput is an input of a figure with what has become of it.
type heldInput struct {
	render.Input
	state string // "same", "changed", "missing" or "unreadable"
	why   string
}

// showFigure prints how a figure is made again.
func showFigure(e *env, o *ShowOptions) error {
	story, err := e.readStory(o.System)
	if err != nil {
		return err
	}
	result, err := story.encode(o.Format)
	if err != nil {
		return err
	}
	return e.deliver(o.Output, result)
}

func (e *env) readStory(path string) (*figureStory, error) {
	fail := func(what, remedy string, err error) (*figureStory, error) {
		return nil, &usageError{Where: path, What: what, Remedy: remedy, Err: err}
	}
	st, err := os.Stat(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return fail("there is no such file", "check the path", err)
	case err != nil:
		return fail("it cannot be read: "+plainCause(err).Error(), "check the path", err)
	case !st.Mode().IsRegular():
		return fail("it is not an ordinary file", "name a figure that this program made", nil)
	}
	data, tooLarge, err := readLimited(path, largestFigure)
	switch {
	case err != nil:
		return fail("it cannot be read: "+plainCause(err).Error(), "check the path", err)
	case tooLarge:
		return fail(fmt.Sprintf("it is larger than %d MiB, and no figure of this program is", largestFigure>>20), "is it the right file?", nil)
	}
	r, err := render.ReadOrigin(data)
	if err != nil {
		return nil, &usageError{Where: path, Err: err}
	}
	story := &figureStory{Reading: r, path: path, version: e.version, unknown: e.unknownCommand(r.Command)}
	ending := filepath.Ext(path)
	story.again = r.CommandLine(strings.TrimSuffix(path, ending) + "-again" + ending)
	for _, in := range r.Inputs {
		story.inputs = append(story.inputs, holdInput(in))
	}
	return story, nil
}

// unknownCommand says why this program would not take the arguments. It also keeps
// a figure from elsewhere from proposing a command that writes further files.
func (e *env) unknownCommand(args []string) string {
	root := NewCmdRoot(&env{version: e.version})
	cmd, rest, err := root.Find(args)
	if err != nil || cmd == root {
		return fmt.Sprintf("there is no verb %q", args[0])
	}
	fs := cmd.Flags()
	if fs.Lookup("figure") == nil {
		return fmt.Sprintf("the verb %s draws no figure", cmd.Name())
	}
	if err := fs.Parse(rest); err != nil {
		return err.Error()
	}
	for _, name := range idleInFigures {
		if fs.Changed(name) {
			return fmt.Sprintf("it holds --%s, which no figure records", name)
		}
	}
	return ""
}

// holdInput compares an input with what bears its name here.
func holdInput(in render.Input) heldInput {
	h := heldInput{Input: in, state: "changed"}
	sum, err := hashHere(in)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		h.state = "missing"
	case err != nil:
		h.state, h.why = "unreadable", plainCause(err).Error()
	case strings.EqualFold(sum, in.SHA256):
		h.state = "same"
	}
	return h
}

// hashHere is the hash of what bears an input's name here.
func hashHere(in render.Input) (string, error) {
	if in.Kind == "system" {
		f, err := systems.Open(in.Name)
		if _, gone := os.Stat(in.Name); err != nil && gone != nil {
			return "", gone
		}
		if err != nil {
			return "", err
		}
		return f.SHA256(), nil
	}
	st, err := os.Stat(in.Name)
	if err != nil {
		return "", err
	}
	if !st.Mode().IsRegular() {
		return "", errors.New("it is not an ordinary file")
	}
	data, tooLarge, err := readLimited(in.Name, maxSamples)
	if tooLarge {
		return "", fmt.Errorf("it is larger than %d MiB", maxSamples>>20)
	}
	return hash(data), err
}

// words is the state of an input in a sentence.
func (h *heldInput) words() string {
	switch h.state {
	case "same":
		return "unchanged"
	case "changed":
		return "CHANGED since: what bears this name here has another hash"
	case "missing":
		return "NOT FOUND here"
	}
	return "CANNOT BE READ here: " + h.why
}

// obstacles are the reasons why the command would not give the same file.
func (s *figureStory) obstacles() []string {
	out := []string{}
	if s.unknown != "" {
		out = append(out, "this version of the program does not take the command: "+s.unknown)
	}
	if s.version != s.Version {
		out = append(out, fmt.Sprintf("the figure was made by version %s, this is %s", s.Version, s.version))
	}
	for _, h := range s.inputs {
		if h.state != "same" {
			out = append(out, h.Kind+" "+h.Name+": "+map[string]string{"changed": "changed since", "missing": "not found here", "unreadable": "cannot be read here"}[h.state])
		}
	}
	if s.Changed {
		out = append(out, "the figure's file itself was changed after it was written")
	}
	return out
}

// unnumbered reports that a version names no certain state of the program.
func unnumbered(version string) bool {
	return version == "unknown" || version == "development" || strings.HasSuffix(version, "+changes")
}

func (s *figureStory) encode(format string) ([]byte, error) {
	switch format {
	case "json":
		return toJSON(s.json())
	case "csv":
		t := newCSV("item", "name", "value", "state")
		t.row("command", "", s.again, "")
		t.row("program", s.Program, s.Version, "")
		for _, h := range s.inputs {
			t.row(h.Kind, h.Name, h.SHA256, h.state)
		}
		for _, src := range s.Sources {
			t.row("source", "", src, "")
		}
		for _, why := range s.obstacles() {
			t.row("obstacle", "", why, "")
		}
		return t.bytes()
	}
	return []byte(s.text()), nil
}

func (s *figureStory) text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s: a figure in %s, made by %s %s\n\nTo make it again\n  %s\n\n", s.path, s.Format, s.Program, s.Version, s.again)
	obstacles := s.obstacles()
	switch {
	case len(obstacles) == 0 && unnumbered(s.version):
		wrap(&b, "", "System and files are those it was made with. Builds of this program without a version, as both are, are not told apart: if the program is the same, the command gives the same bytes.")
	case len(obstacles) == 0:
		wrap(&b, "", "Program, system and files are those it was made with, so the command gives the same bytes.")
	default:
		wrap(&b, "", "The command may not give the same bytes:")
		for _, why := range obstacles {
			wrap(&b, "  - ", why)
		}
	}
	b.WriteString("\nMade from\n")
	for _, h := range s.inputs {
		wrap(&b, "  "+h.Kind+" ", h.Name+": "+h.words())
		fmt.Fprintf(&b, "    SHA-256 %s\n", h.SHA256)
	}
	bullets(&b, "Sources of the numbers", s.Sources)
	return b.String()
}

type figureJSON struct {
	Figure      string          `json:"figure"`
	Format      string          `json:"format"`
	Program     string          `json:"program"`
	Version     string          `json:"version"`
	Command     []string        `json:"command"`
	CommandLine string          `json:"command_line"`
	Epoch       string          `json:"source_date_epoch"` // empty for none
	Inputs      []heldInputJSON `json:"inputs"`
	Sources     []string        `json:"sources"`
	Obstacles   []string        `json:"obstacles"` // why the command may not give the same bytes
}

type heldInputJSON struct {
	Kind   string `json:"kind"`
	Name   string `json:"name"`
	SHA256 string `json:"sha256"`
	State  string `json:"state"`
}

func (s *figureStory) json() figureJSON {
	out := figureJSON{Figure: s.path, Format: s.Format, Program: s.Program, Version: s.Version, Command: s.Command, CommandLine: s.again,
		Epoch: s.Epoch, Inputs: []heldInputJSON{}, Sources: append([]string{}, s.Sources...), Obstacles: s.obstacles()}
	for _, h := range s.inputs {
		out.Inputs = append(out.Inputs, heldInputJSON{h.Kind, h.Name, h.SHA256, h.state})
	}
	return out
}
