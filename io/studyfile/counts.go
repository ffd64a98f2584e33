package studyfile

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"

	"example.org/tailback/demand"
	"example.org/tailback/network/unit"
)

// countTable is a CSV file of counts: a column `time` with interval starts and one column per entry.
type countTable struct {
	file         string
	start, every float64
	columns      []string
	values       [][]float64 // by column and interval
}

func indexed(key string, i int) string { return fmt.Sprintf("%s[%d]", key, i) }

func altNumber(i int) string { return strconv.Itoa(i) }

// counted reads counts, column and unit of an entry.
func (d *draft) counted(t *table, doc *document) demand.Profile {
	for _, key := range []string{"flow", "start", "every"} {
		if t.has(key) {
			t.fault(key, "", "`%s` does not go with `counts`: the file says it", key)
		}
	}
	name := d.file(t.text("counts"))
	line, column := doc.position(t.at("counts"))
	c := d.countsFile(name, doc.name, line, column)
	if c == nil || t.bad {
		return demand.Profile{}
	}
	want := t.text("column")
	if want == "" {
		want = t.text("link")
	}
	at := slices.Index(c.columns, want)
	if at < 0 {
		t.fault("column", "its columns are `"+strings.Join(c.columns, "`, `")+"`", "`%s` has no column `%s`", name, want)
		return demand.Profile{}
	}
	scale := 0.0
	switch u := t.text("unit"); u {
	case "veh":
		scale = 1 / c.every
	case "veh/h":
		scale = unit.VehPerHour
	case "":
		t.fault("", "", "`counts` needs `unit`: \"veh\" (in each interval) or \"veh/h\"")
	default:
		t.fault("unit", "", "`%s` is no unit of counts: \"veh\" (in each interval) or \"veh/h\"", u)
	}
	if t.bad || !d.covers(t, "counts", c.start, c.start+c.every*float64(len(c.values[at]))) {
		return demand.Profile{}
	}
	values := make([]float64, len(c.values[at]))
	for i, x := range c.values[at] {
		values[i] = x * scale
	}
	return d.made(t, "counts", c.start, c.every, values, t.truth("ramp"))
}

// countsFile reads a counts file once; nil after faults.
func (d *draft) countsFile(path, from string, line, column int) *countTable {
	if c, known := d.counts[path]; known {
		return c
	}
	d.counts[path] = nil
	data, ok := d.load(path, line, column, from)
	if !ok {
		return nil
	}
	c := parseCounts(path, data, d.f)
	d.counts[path] = c
	return c
}

// parseCounts reads a counts file; nil after faults.
func parseCounts(file string, data []byte, f *faults) *countTable {
	before := len(f.list)
	r := csv.NewReader(bytes.NewReader(bytes.TrimPrefix(data, []byte("\ufeff"))))
	r.FieldsPerRecord = -1
	r.TrimLeadingSpace = true
	header, err := r.Read()
	if err != nil {
		f.add(file, 1, 0, "the file has no header line: `time` and a column per entry", "")
		return nil
	}
	for i := range header {
		header[i] = strings.TrimSpace(header[i])
	}
	if header[0] != "time" {
		f.add(file, 1, 1, fmt.Sprintf("the first column is `%s`: it must be `time`, the start of each interval as HH:MM", header[0]), "")
		return nil
	}
	c := &countTable{file: file, columns: header[1:], values: make([][]float64, len(header)-1)}
	var last float64
	for rows := 0; ; {
		record, err := r.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			var e *csv.ParseError
			line, column := 0, 0
			if errors.As(err, &e) {
				line, column = e.Line, e.Column
			}
			f.add(file, line, column, "this is not CSV: "+err.Error(), "")
			return nil
		}
		line, _ := r.FieldPos(0)
		if len(record) != len(header) {
			f.add(file, line, 0, fmt.Sprintf("the row has %d fields, the header %d", len(record), len(header)), "")
			continue
		}
		c.row(r, record, rows, &last, f)
		rows++
	}
	if c.every == 0 && len(f.list) == before {
		f.add(file, 0, 0, "the file needs at least two intervals: their distance is the length of one", "")
	}
	if len(f.list) > before {
		return nil
	}
	return c
}

// row takes in one row: its time must follow the last one at the same distance as the first two.
func (c *countTable) row(r *csv.Reader, record []string, rows int, last *float64, f *faults) {
	line, column := r.FieldPos(0)
	now, err := unit.ParseClock(strings.TrimSpace(record[0]))
	switch {
	case err != nil:
		f.add(c.file, line, column, fmt.Sprintf("column `time`: %v", err), "")
	case rows == 0:
		c.start = now
	case rows == 1:
		c.every = now - c.start
		if c.every <= 0 {
			f.add(c.file, line, column, fmt.Sprintf("column `time`: %s does not follow %s", altClock(now), altClock(c.start)), "hours run past 24 for the following day")
		}
	case math.Abs(now-*last-c.every) > 1e-6:
		f.add(c.file, line, column, fmt.Sprintf("column `time`: %s follows %s, but the intervals before are %g min long", altClock(now), altClock(*last), c.every/60), "every interval needs its row")
	}
	*last = now
	for i, text := range record[1:] {
		x, err := strconv.ParseFloat(strings.TrimSpace(text), 64)
		if err != nil || !(x >= 0) || math.IsInf(x, 1) {
			line, column := r.FieldPos(i + 1)
			f.add(c.file, line, column, fmt.Sprintf("column `%s`: `%s` is no count: a number, 0 or more", c.columns[i], text), "")
		}
		c.values[i] = append(c.values[i], x)
	}
}
