package main

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/study"
	"example.org/tailback/io/studyfile"
	"example.org/tailback/io/table"
	"example.org/tailback/network/unit"
)

// job is what every command that computes a study takes.
type job struct {
	Study       string   `arg:"" help:"Study file (TOML), or a folder with a study.toml."`
	Alternative []string `placeholder:"NAME" sep:"none" help:"Compute this alternative beside the base; repeat for more. Default: all."`
	Out         string   `placeholder:"DIR" help:"Folder for results; default results/ beside the study."`
	Units       string   `placeholder:"SYSTEM" default:"metric" help:"Units of the screen: metric or us (files are metric)."`
	JSON        bool     `name:"json" help:"Print JSON in place of the screen."`
	Policy      string   `placeholder:"FILE" help:"Limits (TOML) to hold every run against."`
	Queued      string   `placeholder:"RULE" help:"What counts as queued: density, a speed such as '50 km/h', or a share of the free speed such as '60 %%'."`
}

// ready is a study that can be computed.
type ready struct {
	*studyfile.Study
	units  unit.System
	out    string
	alts   []*studyfile.Alternative // that were asked for
	policy *studyfile.Policy        // nil for none
}

// prepare reads the study and makes sure that the results can be written.
func (c *job) prepare() (*ready, error) {
	units, err := unit.ParseSystem(c.Units)
	if err != nil {
		return nil, inputError{fmt.Errorf("--units: %w", err)}
	}
	st, err := studyfile.Read(c.Study)
	if err != nil {
		return nil, inputError{err}
	}
	if c.Queued != "" {
		if st.Queued, err = studyfile.ParseQueued(c.Queued); err != nil {
			return nil, inputError{fmt.Errorf("--queued: %w", err)}
		}
	}
	r := &ready{Study: st, units: units, out: c.Out}
	if c.Policy != "" {
		if r.policy, err = studyfile.ReadPolicy(c.Policy, st.Base.Network); err != nil {
			return nil, inputError{err}
		}
	}
	if r.alts, err = c.choose(st); err != nil {
		return nil, inputError{err}
	}
	if r.out == "" {
		r.out = filepath.Join(st.Dir, "results")
	}
	if err := writable(r.out); err != nil {
		return nil, inputError{fmt.Errorf("cannot write results: %w", err)}
	}
	return r, nil
}

// choose finds the alternatives that were asked for, all by default.
func (c *job) choose(st *studyfile.Study) ([]*studyfile.Alternative, error) {
	var list []*studyfile.Alternative
	var names []string
	for i := range st.Alternatives {
		a := &st.Alternatives[i]
		names = append(names, a.Name)
		if len(c.Alternative) == 0 || slices.Contains(c.Alternative, a.Name) {
			list = append(list, a)
		}
	}
	for _, name := range c.Alternative {
		switch {
		case slices.Contains(names, name):
		case len(names) == 0:
			return nil, fmt.Errorf("--alternative: there is no `%s`: %s has no alternatives", name, c.Study)
		default:
			return nil, fmt.Errorf("--alternative: there is no `%s`: the study has `%s`", name, strings.Join(names, "`, `"))
		}
	}
	return list, nil
}

// compute runs the base and the alternatives, the base first.
func (r *ready) compute(s session) ([]*study.Result, error) {
	scenarios := []*ctm.Scenario{r.Base}
	for _, a := range r.alts {
		scenarios = append(scenarios, a.Scenario)
	}
	bar := newBar(s.err)
	results, err := study.RunAll(s.ctx, scenarios, &study.Options{Queued: r.Study.Queued, Progress: bar.tell})
	bar.clear()
	if err != nil {
		return nil, err
	}
	for i := range results {
		results[i].Warnings = append(slices.Clone(r.Study.Warnings), results[i].Warnings...)
	}
	return results, nil
}

// name is that of the result number i: base or an alternative's.
func (r *ready) name(i int) string {
	if i == 0 {
		return "base"
	}
	return r.alts[i-1].Name
}

// meta is what the files tell beside the result number i.
func (r *ready) meta(i int) table.Meta {
	m := table.Meta{Study: r.Title, Alternative: r.name(i), Version: version, Reviewer: r.Reviewer}
	for _, in := range r.Inputs {
		m.Inputs = append(m.Inputs, table.Input(in))
	}
	return m
}

// write writes the files of every result.
func (r *ready) write(results []*study.Result) error {
	for i, result := range results {
		if err := table.Write(filepath.Join(r.out, r.name(i)), result, r.meta(i)); err != nil {
			return fmt.Errorf("cannot write results: %w", err)
		}
	}
	return nil
}

// runCommand computes a study and writes its results.
type runCommand struct {
	job
}

// Run reads, computes, writes and prints.
func (c *runCommand) Run(s session) error {
	r, err := c.prepare()
	if err != nil {
		return err
	}
	results, err := r.compute(s)
	if err != nil {
		return err
	}
	found, err := r.judge(results)
	if err != nil {
		return err
	}
	if err := r.write(results); err != nil {
		return err
	}
	if err := r.writeFindings(found); err != nil {
		return err
	}
	for i, result := range results {
		if c.JSON {
			text, err := table.Summary(result, r.meta(i))
			if err != nil {
				return err
			}
			if _, err := s.out.Write(text); err != nil {
				return err
			}
			continue
		}
		view := screen{title: r.Title, name: r.name(i), reviewer: r.Reviewer, folder: filepath.Join(r.out, r.name(i)), units: r.units, result: result}
		if i > 0 {
			fmt.Fprintln(s.out)
			view.changes = r.alts[i-1].Changes(r.units)
			view.notes, view.brief = r.alts[i-1].Notes, true
		}
		if err := view.write(s.out); err != nil {
			return err
		}
		if err := found[i].write(s.out); err != nil {
			return err
		}
	}
	return nil
}

// writable makes the folder for results and sees that a folder can be made in it, so that nothing is computed in
// vain.
func writable(dir string) error {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return err
	}
	probe, err := os.MkdirTemp(dir, ".probe-")
	if err != nil {
		return err
	}
	return os.Remove(probe)
}
