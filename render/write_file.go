package render

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// WriteFile writes the scene to path in the format its ending names. The
// figure is written beside the target and then renamed, so a failure leaves
// an older file as it was.
func (s *Scene) WriteFile(path string, o Options) error {
	format := strings.ToLower(strings.TrimPrefix(filepath.Ext(path), "."))
	b, err := s.encode(format, o)
	if err != nil {
		var fe *FormatError
		if errors.As(err, &fe) {
			fe.Path = path
			return fe
		}
		return fmt.Errorf("%s: %w", path, err)
	}
	if err := replaceFile(path, b); err != nil {
		return fmt.Errorf("cannot write the figure to %s: %w", path, explain(err))
	}
	return nil
}

// replaceFile puts b at path in one step. A link is followed to its file.
func replaceFile(path string, b []byte) error {
	if real, err := filepath.EvalSymlinks(path); err == nil {
		path = real
	}
	mode := fs.FileMode(0o666)
	if st, err := os.Stat(path); err == nil {
		if st.IsDir() {
			return errors.New("it is a folder, name a file")
		}
		mode = st.Mode().Perm()
	}
	f, err := createBeside(path, mode)
	if err != nil {
		return err
	}
	_, err = f.Write(b)
	if cerr := f.Close(); err == nil {
		err = cerr
	}
	if err == nil {
		err = os.Rename(f.Name(), path)
	}
	if err != nil {
		os.Remove(f.Name())
	}
	return err
}

// createBeside opens a new hidden file in the folder of path.
func createBeside(path string, mode fs.FileMode) (*os.File, error) {
	dir, base := filepath.Split(path)
	for i := 0; ; i++ {
		name := filepath.Join(dir, fmt.Sprintf(".%s.%d-%d.part", base, os.Getpid(), i))
		f, err := os.OpenFile(name, os.O_WRONLY|os.O_CREATE|os.O_EXCL, mode)
		if errors.Is(err, fs.ErrExist) && i < 100 {
			continue
		}
		return f, err
	}
}

// explain adds a remedy to the usual file errors, leaving out the name of the
// temporary file.
func explain(err error) error {
	var pe *fs.PathError
	if errors.As(err, &pe) {
		err = pe.Err
	}
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return fmt.Errorf("the folder does not exist, make it first (%w)", err)
	case errors.Is(err, fs.ErrPermission):
		return fmt.Errorf("the folder may not be written to, choose another (%w)", err)
	}
	return err
}
