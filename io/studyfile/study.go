// Package studyfile reads a study: the TOML study file, the GeoJSON network, the TOML demand and CSV counts. It
// reports every mistake of the whole set of files at once, each with file, line and key.
package studyfile

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"strings"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/observe"
	"example.org/tailback/ctm/study"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// Study is everything that a set of files says.
type Study struct {
	File, Dir    string
	Title        string
	Reviewer     string // empty: results are preliminary
	Base         *ctm.Scenario
	Alternatives []Alternative
	Queued       observe.Criterion
	Inputs       []Input
	Warnings     []string
	Diagrams     []Diagram   // of the study file, in the order of their names
	Cost         *study.Cost // nil where the study gives none
}

// Input is a file that was read.
type Input struct{ Name, SHA256 string }

// draft is a study being read.
type draft struct {
	Study
	f        *faults
	doc      *document
	root     *table
	roadFile string
	linkLine []int
	nodeLine map[string]int
	network  *network.Network
	counts   map[string]*countTable
	turned   map[approach]bool // approaches whose turning fractions have been read
	instead  string            // a demand file in place of the study's, "" none
}

func (d *draft) warn(format string, args ...any) {
	d.Warnings = append(d.Warnings, fmt.Sprintf(format, args...))
}

// Read reads a study file, or study.toml in a folder. The error is Errors, or one of the file system for the study
// file itself.
func Read(path string) (*Study, error) { return readStudy(path, "") }

// ReadDay reads a study with another demand file (a path) in place of its own: that of a day of the week.
func ReadDay(path, demandFile string) (*Study, error) {
	full, err := filepath.Abs(demandFile)
	if err != nil {
		return nil, err
	}
	return readStudy(path, full)
}

// readStudy reads a study, with a demand file in place of its own where one is given.
func readStudy(path, demandFile string) (*Study, error) {
	if info, err := os.Stat(path); err == nil && info.IsDir() {
		path = filepath.Join(path, "study.toml")
	}
	d := &draft{f: &faults{}, counts: make(map[string]*countTable), turned: make(map[approach]bool), instead: demandFile}
	d.File, d.Dir = path, filepath.Dir(path)
	data, ok := d.load(path, 0, 0, path)
	if !ok {
		return nil, d.f.err()
	}
	if d.doc, ok = decode(path, data, d.f); !ok {
		return nil, d.f.err()
	}
	d.root = d.doc.root(d.f)
	d.read()
	if err := d.f.err(); err != nil {
		return nil, err
	}
	return &d.Study, nil
}

// load reads a file that another one names at a line, and remembers its checksum.
func (d *draft) load(path string, line, column int, from string) ([]byte, bool) {
	data, err := os.ReadFile(path)
	if err != nil {
		var e *fs.PathError
		text := err.Error()
		if errors.As(err, &e) {
			text = e.Err.Error()
		}
		d.f.add(from, line, column, fmt.Sprintf("cannot read `%s`: %s", path, text), "")
		return nil, false
	}
	sum := sha256.Sum256(data)
	name, err := filepath.Rel(d.Dir, path)
	if err != nil {
		name = path
	}
	d.Inputs = append(d.Inputs, Input{filepath.ToSlash(name), hex.EncodeToString(sum[:])})
	return data, true
}

// file is the path of a file that a key names, relative to the study.
func (d *draft) file(name string) string {
	if filepath.IsAbs(name) {
		return name
	}
	return filepath.Join(d.Dir, filepath.FromSlash(name))
}

// read reads the whole study. Later parts are read as far as earlier ones allow.
func (d *draft) read() {
	d.root.known("title reviewer network demand time queue diagram corridor junction signal meter outflow routing cost alternative class entry turning trips")
	d.Title, d.Reviewer = d.root.text("title"), d.root.text("reviewer")
	if d.Title == "" {
		d.warn("%s: the study has no `title`", d.File)
		d.Title = strings.TrimSuffix(filepath.Base(d.File), ".toml")
	}
	sc := &ctm.Scenario{Name: "base", Title: d.Title, Horizon: d.time()}
	d.Base = sc
	d.queue()
	d.diagrams()
	d.later(d.root, "signal", "meter", "routing")
	if name := d.root.text("network"); name == "" {
		if !d.root.has("network") {
			d.root.fault("", `add network = "network.geojson"`, "a study needs a `network`")
		}
	} else {
		line, column := d.doc.position("network")
		if data, ok := d.load(d.file(name), line, column, d.File); ok {
			d.network = d.readNetwork(d.file(name), data)
		}
	}
	sc.Network = d.network
	sc.Demand = d.demand()
	if d.network == nil || sc.Demand == nil {
		return
	}
	d.Cost = d.cost(sc.Demand.Classes)
	sc.Corridors = d.corridors()
	sc.Junctions = d.junctions()
	sc.Outflows = d.outflows()
	if len(d.f.list) > 0 {
		return
	}
	d.checkRoad(sc)
	if len(d.f.list) == 0 {
		d.alternatives()
	}
}

// later refuses keys of the contract that this version does not read yet.
func (d *draft) later(t *table, keys ...string) {
	for _, key := range keys {
		if t.has(key) {
			t.fault(key, "take it out to run the rest", "`%s` is not available in this version of tailback", key)
		}
	}
}

// time reads [time].
func (d *draft) time() ctm.Horizon {
	h := ctm.Horizon{Report: 300}
	t := d.root.table("time")
	if t == nil {
		d.root.fault("time", `add [time] with start = "05:00" and end = "22:00"`, "a study needs a [time] table")
		return h
	}
	t.known("start end cell step stretch_short_links report")
	for _, key := range []string{"start", "end"} {
		if !t.has(key) {
			t.fault("", "", "[time] needs `%s`, such as \"05:00\"", key)
		}
	}
	h.Start, h.End = t.clock("start", 0), t.clock("end", 86400)
	h.Cell, h.Step = t.quantity("cell", unit.Length, 0), t.quantity("step", unit.Duration, 0)
	h.Report = t.quantity("report", unit.Duration, 300)
	h.Stretch = t.truth("stretch_short_links")
	switch {
	case t.bad:
	case h.End <= h.Start:
		t.fault("end", "hours run past 24 for the following day: 05:00 of day 2 is \"29:00\"", "the period ends at %s, not after its start at %s", altClock(h.End), altClock(h.Start))
	case t.has("cell") && t.has("step"):
		t.fault("step", "keep the one that matters to you", "`cell` and `step` determine each other: give at most one of them")
	case t.has("cell") && !(h.Cell >= 0.1):
		t.fault("cell", "", "a cell of %g m is too short: at least 0.1 m", h.Cell)
	case t.has("step") && !(h.Step >= 0.001):
		t.fault("step", "", "a step of %g s is too short: at least 0.001 s", h.Step)
	case !(h.Report >= 1) || math.Abs(h.Report-math.Round(h.Report)) > 1e-9:
		t.fault("report", "", "a result row of %g s is not possible: whole seconds, at least 1", h.Report)
	case h.Report > h.End-h.Start:
		t.fault("report", "", "a result row of %g s is longer than the period of %g s", h.Report, h.End-h.Start)
	}
	return h
}

// queue reads [queue]: what counts as queued.
func (d *draft) queue() {
	t := d.root.table("queue")
	if t == nil {
		return
	}
	t.known("when")
	if !t.has("when") {
		return
	}
	text := t.text("when")
	c, err := ParseQueued(text)
	if err != nil && !t.bad {
		t.fault("when", "", "%v", err)
	}
	d.Queued = c
}

// ParseQueued reads what counts as queued: "density", a speed such as "50 km/h", or a share of the free speed such as
// "60 %".
func ParseQueued(text string) (observe.Criterion, error) {
	if text == "density" {
		return observe.Criterion{}, nil
	}
	if v, err := unit.Parse(unit.Speed, text); err == nil && v > 0 {
		return observe.Criterion{Kind: observe.SpeedBelow, Value: v}, nil
	}
	if s, err := unit.Parse(unit.Share, text); err == nil && s > 0 && s <= 1 {
		return observe.Criterion{Kind: observe.ShareBelow, Value: s}, nil
	}
	return observe.Criterion{}, fmt.Errorf("`%s` does not say what counts as queued: \"density\" (above critical), a speed such as \"50 km/h\", or a share of the free speed such as \"60 %%\"", text)
}

// checkRoad checks the network against the demand.
func (d *draft) checkRoad(sc *ctm.Scenario) {
	problems := append(sc.Demand.CheckTurns(sc.Network), sc.Network.CheckReach(sc.Demand.EntryLinks())...)
	for _, p := range problems {
		line := 0
		if p.Link >= 0 {
			line = d.linkLine[p.Link]
		}
		d.f.add(d.roadFile, line, 0, p.Text, p.Hint)
	}
}

// alternatives reads every [[alternative]].
func (d *draft) alternatives() {
	list := d.root.tables("alternative")
	tables := make([]map[string]any, len(list))
	for i := range list {
		tables[i] = list[i].keys
	}
	names := make([]string, len(d.Diagrams))
	for i := range d.Diagrams {
		names[i] = d.Diagrams[i].Name
	}
	d.Alternatives = alternatives(d.Base, tables, names, d.root.report, func(path, text, hint string) {
		line, _ := d.doc.position(path)
		if hint != "" {
			text += " (" + hint + ")"
		}
		d.warn("%s:%d: %s", d.File, line, text)
	})
}
