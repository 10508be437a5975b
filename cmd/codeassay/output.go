package main

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
)

// writeWhole writes a file under another name and renames it when it is complete,
// so that no half-written file is ever seen. Folders are made as needed.
func writeWhole(path string, write func(io.Writer) error) (err error) {
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		return cannotWrite(filepath.Dir(path), err)
	}
	part := path + ".part"
	f, err := os.Create(part)
	if err != nil {
		return cannotWrite(path, err)
	}
	defer func() {
		if err != nil {
			f.Close()
			os.Remove(part)
			err = cannotWrite(path, err)
		}
	}()
	b := bufio.NewWriterSize(f, 1<<16)
	if err := write(b); err != nil {
		return err
	}
	if err := b.Flush(); err != nil {
		return err
	}
	if err := f.Close(); err != nil {
		return err
	}
	return os.Rename(part, path)
}

// cannotWrite is the failure to write a path, without the system's wording twice.
func cannotWrite(path string, err error) error {
	var f failure
	if errors.As(err, &f) {
		return err
	}
	var at *fs.PathError
	if errors.As(err, &at) {
		err = at.Err
	}
	return failure{fmt.Errorf("%s: cannot be written: %w", path, err)}
}
