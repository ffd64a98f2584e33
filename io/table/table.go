// Package table writes the results of a run as CSV and JSON files.
package table

import (
	"errors"
	"os"
	"path/filepath"
	"strings"

	"example.org/tailback/ctm/study"
	"example.org/tailback/network"
)

// Write writes every result file of a run into dir, replacing what was there. The files are written to a folder
// beside it first and moved into place whole: a failure leaves the earlier results as they were.
func Write(dir string, r *study.Result, meta Meta) error {
	return Replace(dir, func(tmp string) error {
		for _, write := range []func(string, *study.Result) error{
			writeLinks, writeEntries, writeNetwork, writeCorridors, writeQueues, writeBottlenecks, writeThroughput, writeSpillback, writeWarning,
		} {
			if err := write(tmp, r); err != nil {
				return err
			}
		}
		return writeSummary(tmp, r, meta)
	})
}

// Replace fills a temporary folder beside dir and then puts it in dir's place. A failure leaves dir as it was.
func Replace(dir string, fill func(tmp string) error) (err error) {
	parent, name := filepath.Split(filepath.Clean(dir))
	if parent == "" {
		parent = "."
	}
	if err := os.MkdirAll(parent, 0o777); err != nil {
		return err
	}
	tmp, err := os.MkdirTemp(parent, "."+name+"-new-")
	if err != nil {
		return err
	}
	defer func() {
		if e := os.RemoveAll(tmp); err == nil {
			err = e
		}
	}()
	if err := os.Chmod(tmp, 0o755); err != nil {
		return err
	}
	if err := fill(tmp); err != nil {
		return err
	}
	old := strings.Replace(tmp, "-new-", "-old-", 1)
	switch err := os.Rename(dir, old); {
	case errors.Is(err, os.ErrNotExist):
		old = ""
	case err != nil:
		return err
	}
	if err := os.Rename(tmp, dir); err != nil {
		if old != "" {
			err = errors.Join(err, os.Rename(old, dir))
		}
		return err
	}
	if old != "" {
		return os.RemoveAll(old)
	}
	return nil
}

func linkName(r *study.Result, l network.LinkID) string { return r.Scenario.Network.Links[l].Name }
