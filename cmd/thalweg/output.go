package main

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
)

// checkTarget refuses, before any work is done, a file that cannot be written.
func checkTarget(flag, path string) error {
	if path == "-" {
		return nil
	}
	where := flag + " " + path
	if path == "" {
		return &usageError{Where: flag, What: "the file name is empty", Remedy: "name a file"}
	}
	if st, err := os.Stat(path); err == nil && st.IsDir() {
		return &usageError{Where: where, What: "it is a folder", Remedy: "name a file"}
	}
	if st, err := os.Stat(filepath.Dir(path)); err != nil || !st.IsDir() {
		return &usageError{Where: where, What: "its folder does not exist", Remedy: "make the folder first", Err: err}
	}
	return nil
}

// deliver puts a finished result on standard output or into a file.
func (e *env) deliver(path string, result []byte) error {
	if path == "-" {
		_, err := e.out.Write(result)
		return err
	}
	if err := replaceFile(path, result); err != nil {
		return fmt.Errorf("%s: the result could not be written: %w", path, plainCause(err))
	}
	return nil
}

// replaceFile writes a file beside the target and renames it, so that a failure
// leaves an older file as it was. A link is followed; what is not an ordinary
// file, such as a device or a pipe, is written to directly.
func replaceFile(path string, b []byte) error {
	if p, err := filepath.EvalSymlinks(path); err == nil {
		path = p
	}
	mode := fs.FileMode(0o666)
	if st, err := os.Stat(path); err == nil {
		if !st.Mode().IsRegular() {
			return writeThrough(path, b)
		}
		mode = st.Mode().Perm()
	}
	f, err := createBeside(path, mode)
	if err != nil {
		return err
	}
	_, err = f.Write(b)
	err = errors.Join(err, f.Close())
	if err == nil {
		err = os.Rename(f.Name(), path)
	}
	if err != nil {
		os.Remove(f.Name())
	}
	return err
}

// writeThrough writes to something that cannot be replaced.
func writeThrough(path string, b []byte) error {
	f, err := os.OpenFile(path, os.O_WRONLY, 0)
	if err != nil {
		return err
	}
	_, err = f.Write(b)
	return errors.Join(err, f.Close())
}

// createBeside opens a new hidden file in the folder of path.
func createBeside(path string, mode fs.FileMode) (f *os.File, err error) {
	dir, base := filepath.Split(path)
	for i := 0; i < 100; i++ {
		name := filepath.Join(dir, fmt.Sprintf(".%s.%d-%d.part", base, os.Getpid(), i))
		f, err = os.OpenFile(name, os.O_WRONLY|os.O_CREATE|os.O_EXCL, mode)
		if !errors.Is(err, fs.ErrExist) {
			break
		}
	}
	return f, err
}

// plainCause is the reason behind a file error, with a remedy, and without the
// name of a temporary file.
func plainCause(err error) error {
	var p *fs.PathError
	var l *os.LinkError
	switch {
	case errors.As(err, &p):
		err = p.Err
	case errors.As(err, &l):
		err = l.Err
	}
	if errors.Is(err, fs.ErrPermission) {
		return fmt.Errorf("%w; choose a folder that you may write to", err)
	}
	return err
}

// readLimited reads a file of at most limit bytes; tooLarge says that it is
// larger.
func readLimited(path string, limit int64) (b []byte, tooLarge bool, err error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, false, err
	}
	defer f.Close()
	b, err = io.ReadAll(io.LimitReader(f, limit+1))
	return b, int64(len(b)) > limit, err
}
