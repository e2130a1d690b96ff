package systems

import (
	"bytes"
	"embed"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"sort"
	"strings"
	"unicode/utf8"

	"github.com/pelletier/go-toml/v2"
)

//go:embed *.toml
var builtin embed.FS

const (
	ending  = ".toml"
	maxSize = 1 << 20 // bytes; the built-in files are some kilobytes
)

// Names lists the built-in systems, sorted.
func Names() []string {
	files, _ := fs.Glob(builtin, "*"+ending) // the pattern is well formed
	for i, f := range files {
		files[i] = strings.TrimSuffix(f, ending)
	}
	sort.Strings(files)
	return files
}

// UnknownSystemError says that a name is no built-in system.
type UnknownSystemError struct {
	Name  string
	Near  []string // built-in names that may have been meant, best first
	Known []string // all built-in names
}

// Error names the system, and what to write instead.
func (e *UnknownSystemError) Error() string {
	s := fmt.Sprintf("there is no built-in system %q", e.Name)
	if len(e.Near) > 0 {
		s += "; did you mean " + strings.Join(e.Near, " or ") + "?"
	} else {
		s += "."
	}
	return s + " Built-in are " + strings.Join(e.Known, ", ") + "; a file of your own is given by its path, which ends in " + ending
}

// Builtin reads a built-in system. The error of an unknown name is an
// [*UnknownSystemError].
func Builtin(name string) (*File, error) {
	data, err := builtin.ReadFile(name + ending)
	if err != nil {
		return nil, &UnknownSystemError{name, nearest(name, Names()), Names()}
	}
	return Parse(name, data)
}

// Open reads the system that a user named: a path if it ends in .toml or holds a
// path separator, else a built-in name.
func Open(nameOrPath string) (*File, error) {
	if strings.HasSuffix(nameOrPath, ending) || strings.ContainsRune(nameOrPath, '/') || strings.ContainsRune(nameOrPath, os.PathSeparator) {
		return Load(nameOrPath)
	}
	return Builtin(nameOrPath)
}

// Load reads a system file from disk. What is wrong with the file is a
// [*FileError].
func Load(path string) (*File, error) {
	dir, base := filepath.Split(path)
	if dir == "" {
		dir = "."
	}
	if base == "" {
		dir, base = path, "."
	}
	return loadFrom(os.DirFS(dir), base, path)
}

// loadFrom reads the file base of a file system; name is what the user called it.
func loadFrom(fsys fs.FS, base, name string) (*File, error) {
	data, err := readFile(fsys, base, name, "a system file")
	if err != nil {
		return nil, err
	}
	return Parse(name, data)
}

// readFile reads an ordinary file of a bounded size; what names the kind of file.
func readFile(fsys fs.FS, base, name, what string) ([]byte, error) {
	info, err := fs.Stat(fsys, base)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil, wholeFile(name, "there is no such file", "check the path")
	case errors.Is(err, fs.ErrPermission):
		return nil, wholeFile(name, "you may not read it", "check its permissions")
	case err != nil:
		return nil, wholeFile(name, "it cannot be read: "+plainCause(err), "check the path")
	case info.IsDir():
		return nil, wholeFile(name, "it is a directory", "give "+what+", which ends in "+ending)
	case !info.Mode().IsRegular():
		return nil, wholeFile(name, "it is not an ordinary file", "give "+what+", which ends in "+ending)
	case filepath.Ext(base) != ending:
		return nil, wholeFile(name, "its name does not end in "+ending, "give "+what+", or rename it")
	}
	data, err := readLimited(fsys, base)
	if err != nil {
		return nil, wholeFile(name, "it cannot be read: "+plainCause(err), "check its permissions")
	}
	return data, nil
}

// plainCause is the reason behind a file error, without the path.
func plainCause(err error) string {
	var p *fs.PathError
	if errors.As(err, &p) {
		return p.Err.Error()
	}
	return err.Error()
}

// readLimited reads a file, but never much more than a system file may have.
func readLimited(fsys fs.FS, base string) ([]byte, error) {
	file, err := fsys.Open(base)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	return io.ReadAll(io.LimitReader(file, maxSize+1))
}

// Parse reads a system file from memory; name stands in the messages. What is
// wrong with it, all of it, is a [*FileError].
func Parse(name string, data []byte) (*File, error) {
	var w wireFile
	r, err := decode(name, data, &w, systemSchema, "a system file")
	if err != nil {
		return nil, err
	}
	f := &File{Name: name, raw: bytes.Clone(data)}
	(&checker{report: r, w: &w, f: f}).check()
	if err := r.err(); err != nil {
		return nil, err
	}
	return f, nil
}

// decode reads a TOML document into w, a pointer to a wire type with this schema.
// What is wrong with its form, all of it, is a [*FileError].
func decode(name string, data []byte, w any, s schema, what string) (*report, error) {
	text := bytes.TrimPrefix(data, []byte("\uFEFF"))
	switch {
	case len(data) > maxSize:
		return nil, wholeFile(name, "it is larger than 1 MiB", what+" has some kilobytes: is it the right file?")
	case len(bytes.TrimSpace(text)) == 0:
		return nil, wholeFile(name, "it is empty", "see an example for the form of "+what)
	case !utf8.Valid(text):
		return nil, wholeFile(name, "it is not UTF-8 text", "save it as UTF-8")
	}
	r := &report{file: name, index: newIndex(text)}
	decodable := checkSchema(r, s)
	if !r.decode(text, w, decodable) {
		return nil, r.err()
	}
	return r, nil
}

// decode fills w and reports whether it could. Values of the wrong form and
// unknown keys are known already from the schema; what is left is syntax.
func (r *report) decode(data []byte, w any, decodable bool) bool {
	var syntax *toml.DecodeError
	if !decodable {
		// Only the syntax can still be judged.
		var any map[string]any
		if err := toml.Unmarshal(data, &any); errors.As(err, &syntax) {
			r.syntax(syntax, data)
		}
		return false
	}
	d := toml.NewDecoder(bytes.NewReader(data))
	if len(r.problems) == 0 {
		// The schema and the decoder must agree that every key is known. (With
		// many unknown keys the decoder takes time with the square of their number.)
		d.DisallowUnknownFields()
	}
	err := d.Decode(w)
	var missing *toml.StrictMissingError
	switch {
	case err == nil:
		return true
	case errors.As(err, &missing):
		for i := range missing.Errors {
			r.syntax(&missing.Errors[i], data)
		}
		return true
	case errors.As(err, &syntax):
		r.syntax(syntax, data)
	default:
		r.add("", "it cannot be read as TOML: "+strings.TrimPrefix(err.Error(), "toml: "), "correct the file")
	}
	return false
}

// syntax reports what the decoder found, with the column in characters.
func (r *report) syntax(e *toml.DecodeError, data []byte) {
	line, column := e.Position()
	if lines := bytes.Split(data, []byte("\n")); line >= 1 && line <= len(lines) {
		text := lines[line-1]
		column = utf8.RuneCount(text[:max(0, min(column-1, len(text)))]) + 1
	}
	r.problems = append(r.problems, Problem{
		File: r.file, Line: line, Column: column, Key: strings.Join(e.Key(), "."),
		Reason: "this is not TOML: " + strings.TrimPrefix(e.Error(), "toml: "),
		Remedy: "correct the line",
	})
}
