package systems

import (
	"os"
	"path/filepath"
	"reflect"
)

// Document is a TOML file read as strictly as a system file is: an unknown key or a
// value of the wrong form is an error with line and column. What is found wrong with
// its meaning is added by [Document.Add] and reported together by [Document.Err].
type Document struct{ r *report }

// ReadDocument reads the file at path into v, a pointer to a struct whose fields carry
// toml tags; what names the kind of file in messages: "a plan". The error is a
// [*FileError].
func ReadDocument(path, what string, v any) (*Document, error) {
	dir, base := filepath.Split(path)
	if dir == "" {
		dir = "."
	}
	data, err := readFile(os.DirFS(dir), base, path, what)
	if err != nil {
		return nil, err
	}
	r, err := decode(path, data, v, newSchema(reflect.TypeOf(v).Elem()), what)
	if err != nil {
		return nil, err
	}
	return &Document{r}, nil
}

// Add notes a problem at a key, given by its path such as panel[2].at, or at the
// nearest table above it that the file holds.
func (d *Document) Add(key, reason, remedy string) { d.r.add(key, reason, remedy) }

// Err is a [*FileError] with the problems added, in the order of the file; nil
// without any.
func (d *Document) Err() error { return d.r.err() }
