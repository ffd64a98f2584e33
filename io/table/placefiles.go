package table

import (
	"os"
	"path/filepath"
)

// Place fills a temporary folder inside dir and then moves each file into dir, over an older one of its name. A failure
// while the folder is filled leaves dir as it was.
func Place(dir string, fill func(tmp string) error) (err error) {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return err
	}
	tmp, err := os.MkdirTemp(dir, ".new-")
	if err != nil {
		return err
	}
	defer func() {
		if e := os.RemoveAll(tmp); err == nil {
			err = e
		}
	}()
	if err := fill(tmp); err != nil {
		return err
	}
	files, err := os.ReadDir(tmp)
	if err != nil {
		return err
	}
	for _, f := range files {
		if err := os.Rename(filepath.Join(tmp, f.Name()), filepath.Join(dir, f.Name())); err != nil {
			return err
		}
	}
	return nil
}
