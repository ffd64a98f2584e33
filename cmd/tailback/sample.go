package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"example.org/tailback/testdata"
)

// sampleCommand writes the demo study.
type sampleCommand struct {
	Dir string `arg:"" help:"Folder to write into; made where it does not exist." type:"path"`
}

// Run writes every file of the demo, or none where one of them is there already.
func (c *sampleCommand) Run(s session) error {
	demo, err := fs.Sub(testdata.Sedgarth, "sedgarth")
	if err != nil {
		panic("tailback: " + err.Error())
	}
	files, err := fs.Glob(demo, "*")
	if err != nil {
		panic("tailback: " + err.Error())
	}
	var there []string
	for _, name := range files {
		if _, err := os.Lstat(filepath.Join(c.Dir, name)); err == nil {
			there = append(there, name)
		} else if !errors.Is(err, fs.ErrNotExist) {
			return inputError{err}
		}
	}
	if len(there) > 0 {
		return inputError{fmt.Errorf("%s holds %s already: nothing is written over; name another folder", short(c.Dir), strings.Join(there, ", "))}
	}
	if err := os.MkdirAll(c.Dir, 0o755); err != nil {
		return inputError{fmt.Errorf("cannot write the demo: %w", err)}
	}
	for _, name := range files {
		if err := copyOut(demo, name, filepath.Join(c.Dir, name)); err != nil {
			return fmt.Errorf("cannot write the demo: %w", err)
		}
	}
	study := filepath.Join(short(c.Dir), "study.toml")
	fmt.Fprintf(s.out, "Wrote %s into %s.\nNext: tailback check %s\n      tailback run %s\n",
		strings.Join(files, ", "), short(c.Dir), study, study)
	return nil
}

// copyOut writes one file that must not exist yet.
func copyOut(demo fs.FS, name, path string) error {
	text, err := fs.ReadFile(demo, name)
	if err != nil {
		return err
	}
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o644)
	if err != nil {
		return err
	}
	if _, err := f.Write(text); err != nil {
		f.Close()
		return err
	}
	return f.Close()
}

// short gives a path relative to the working folder where it lies below, as a person would type it.
func short(path string) string {
	here, err := os.Getwd()
	if err != nil {
		return path
	}
	rel, err := filepath.Rel(here, path)
	if err != nil || strings.HasPrefix(rel, "..") {
		return path
	}
	return rel
}
