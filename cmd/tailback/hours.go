package main

import (
	"errors"
	"fmt"
	"io/fs"
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

// hoursCommand finds the hours in which an alternative's closure keeps the limits of a policy.
type hoursCommand struct {
	Study       string   `arg:"" help:"Study file (TOML), or a folder with a study.toml."`
	Alternative string   `required:"" placeholder:"NAME" help:"Alternative whose measures are moved."`
	Policy      string   `required:"" placeholder:"FILE" help:"Limits (TOML)."`
	Days        string   `placeholder:"DIR" help:"Folder with one demand file per day: monday.toml to sunday.toml."`
	Durations   []string `placeholder:"DURATION" help:"Durations to try, such as 2h,4h; default 1 to 8 h."`
	Every       string   `placeholder:"DURATION" default:"1h" help:"Time between two starts."`
	ClearBy     string   `placeholder:"HH:MM" help:"Find the latest reopening that lets the queue go by this time (for the alternative's own start)."`
	Out         string   `placeholder:"DIR" help:"Folder for results; default results/ beside the study."`
	Units       string   `placeholder:"SYSTEM" default:"metric" help:"Units of the screen: metric or us (files are metric)."`
}

// chart is what the hours of a study are computed from and what came out.
type chart struct {
	units             unit.System
	out               string
	policy            *studyfile.Policy
	starts, durations []float64
	clearBy           float64 // 0 none
	alternative       *studyfile.Alternative
	own               study.Window // the alternative's
	study             *studyfile.Study
	days              []table.Day
	late              []study.Late
	reopen            float64 // s, 0 where it was not sought
	reopenErr         error
}

// Run reads, computes, writes and prints.
func (c *hoursCommand) Run(s session) error {
	h, days, err := c.prepare()
	if err != nil {
		return inputError{err}
	}
	bar := newBar(s.err)
	for i, day := range days {
		tell := func(done, total float64) { bar.tell(float64(i)+done/total, float64(len(days))) }
		if err := h.day(s, day, i == 0, tell); err != nil {
			bar.clear()
			return err
		}
	}
	bar.clear()
	err = table.Place(h.out, func(tmp string) error {
		if err := table.WriteHours(tmp, h.days); err != nil {
			return err
		}
		return table.WriteOverrun(tmp, h.late, h.study.Base.Network, h.study.Cost)
	})
	if err != nil {
		return fmt.Errorf("cannot write results: %w", err)
	}
	return h.write(s.out, filepath.Join(h.out, "hours.csv")+", overrun.csv")
}

// weekday is a day to compute.
type weekday struct {
	name  string
	study *studyfile.Study
}

// weekdays are the names of the demand files of --days, in order.
var weekdays = [...]string{"monday", "tuesday", "wednesday", "thursday", "friday", "saturday", "sunday"}

// prepare reads everything and checks it before anything is computed.
func (c *hoursCommand) prepare() (*chart, []weekday, error) {
	h := &chart{out: c.Out}
	var err error
	if h.units, err = unit.ParseSystem(c.Units); err != nil {
		return nil, nil, fmt.Errorf("--units: %w", err)
	}
	days, err := c.read()
	if err != nil {
		return nil, nil, err
	}
	h.study = days[0].study
	if h.policy, err = studyfile.ReadPolicy(c.Policy, h.study.Base.Network); err != nil {
		return nil, nil, err
	}
	if len(h.study.Base.Corridors) == 0 {
		for _, l := range h.policy.Limits {
			if l.Kind == study.DelayLimit {
				return nil, nil, fmt.Errorf("the limit `%s` of %s: %w", l.Name, c.Policy, study.ErrNoCorridor)
			}
		}
	}
	if h.alternative, h.own, err = c.find(h.study); err != nil {
		return nil, nil, err
	}
	if err := c.times(h); err != nil {
		return nil, nil, err
	}
	if h.out == "" {
		h.out = filepath.Join(h.study.Dir, "results")
	}
	if err := writable(h.out); err != nil {
		return nil, nil, fmt.Errorf("cannot write results: %w", err)
	}
	return h, days, nil
}

// read reads the study, once for each day.
func (c *hoursCommand) read() ([]weekday, error) {
	if c.Days == "" {
		st, err := studyfile.Read(c.Study)
		return []weekday{{"", st}}, err
	}
	var days []weekday
	for _, name := range weekdays {
		file := filepath.Join(c.Days, name+".toml")
		if _, err := os.Stat(file); errors.Is(err, fs.ErrNotExist) {
			continue
		}
		st, err := studyfile.ReadDay(c.Study, file)
		if err != nil {
			return nil, err
		}
		days = append(days, weekday{name, st})
	}
	if days == nil {
		return nil, fmt.Errorf("--days: `%s` holds none of %s.toml", c.Days, strings.Join(weekdays[:], ".toml, "))
	}
	return days, nil
}

// find finds the alternative and when its measures last.
func (c *hoursCommand) find(st *studyfile.Study) (*studyfile.Alternative, study.Window, error) {
	choice := job{Study: c.Study, Alternative: []string{c.Alternative}}
	list, err := choice.choose(st)
	if err != nil {
		return nil, study.Window{}, err
	}
	w, err := list[0].Window()
	if err != nil {
		return nil, w, fmt.Errorf("--alternative: `%s`: %w", c.Alternative, err)
	}
	return list[0], w, nil
}

// times reads starts, durations and the time of --clear-by.
func (c *hoursCommand) times(h *chart) error {
	every, err := unit.Parse(unit.Duration, c.Every)
	if err == nil && every < unit.Minute {
		err = fmt.Errorf("`%s` is too short: at least 1 min", c.Every)
	}
	if err != nil {
		return fmt.Errorf("--every: %w", err)
	}
	horizon := h.study.Base.Horizon
	for t := 0.0; t < 24*unit.Hour; t += every {
		if t >= horizon.Start || t+24*unit.Hour >= horizon.End {
			h.starts = append(h.starts, t)
		}
	}
	for _, text := range c.Durations {
		d, err := unit.Parse(unit.Duration, text)
		if err == nil && d < unit.Minute {
			err = fmt.Errorf("`%s` is too short: at least 1 min", text)
		}
		if err != nil {
			return fmt.Errorf("--durations: %w", err)
		}
		h.durations = append(h.durations, d)
	}
	for d := 1.0; d <= 8 && len(c.Durations) == 0; d++ {
		h.durations = append(h.durations, d*unit.Hour)
	}
	slices.Sort(h.durations)
	h.durations = slices.Compact(h.durations)
	if c.ClearBy == "" {
		return nil
	}
	if h.clearBy, err = unit.ParseClock(c.ClearBy); err != nil {
		return fmt.Errorf("--clear-by: %w", err)
	}
	if h.clearBy <= h.own.Start {
		h.clearBy += 24 * unit.Hour
	}
	return nil
}

// day computes one day; the first one also reopens late.
func (h *chart) day(s session, day weekday, first bool, tell func(done, total float64)) error {
	alt, _, err := (&hoursCommand{Alternative: h.alternative.Name}).find(day.study)
	if err != nil {
		return err
	}
	shift := func(w study.Window) (*ctm.Scenario, error) { return alt.Shift(h.own, w) }
	starts := append(slices.Clone(h.starts), h.own.Start)
	trunk, err := study.NewTrunk(s.ctx, day.study.Base, starts, &study.Options{Queued: day.study.Queued})
	if err != nil {
		return err
	}
	rows, err := study.Hours(s.ctx, trunk, shift, h.policy.Limits, h.starts, h.durations, tell)
	if err != nil {
		return err
	}
	h.days = append(h.days, table.Day{Name: day.name, Network: day.study.Base.Network, Rows: rows})
	if !first {
		return nil
	}
	if h.late, err = study.Overrun(s.ctx, trunk, shift, h.own, day.study.Cost); err != nil {
		return err
	}
	if h.clearBy > 0 {
		h.reopen, h.reopenErr = study.LatestReopening(s.ctx, trunk, shift, h.own.Start, h.clearBy)
		if h.reopenErr != nil && !errors.Is(h.reopenErr, study.ErrTooLate) {
			return h.reopenErr
		}
	}
	return nil
}
