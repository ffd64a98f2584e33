package main

import (
	"fmt"
	"io"
	"math"
	"path/filepath"
	"strings"

	"example.org/tailback/ctm/observe"
	"example.org/tailback/ctm/study"
	"example.org/tailback/io/table"
	"example.org/tailback/network/unit"
)

// findings is what an alternative is judged by beside the numbers of its run.
type findings struct {
	*ready
	name         string
	base, result *study.Result // base is nil for the base itself
	verdicts     []study.Verdict
	attribution  []study.Attribution
}

// judge holds the policy's limits against every result, and finds what became of the base's bottlenecks.
func (r *ready) judge(results []*study.Result) ([]*findings, error) {
	var list []*findings
	for i, result := range results {
		f := &findings{ready: r, name: r.name(i), result: result}
		if i > 0 {
			f.base = results[0]
			f.attribution = study.Attribute(f.base, result)
		}
		if r.policy != nil {
			normal := f.base
			if normal == nil {
				normal = result // nothing is above normal in the base
			}
			for k := range r.policy.Limits {
				l := &r.policy.Limits[k]
				against := f.base
				if l.AboveNormal {
					against = normal
				}
				v, err := study.Judge(l, result, against)
				if err != nil {
					return nil, inputError{fmt.Errorf("the limit `%s`: %w", l.Name, err)}
				}
				f.verdicts = append(f.verdicts, v)
			}
		}
		list = append(list, f)
	}
	return list, nil
}

// writeFindings writes attribution.csv of each alternative and verdicts.csv.
func (r *ready) writeFindings(list []*findings) error {
	var names []string
	var verdicts [][]study.Verdict
	for _, f := range list {
		names, verdicts = append(names, f.name), append(verdicts, f.verdicts)
		if f.base == nil {
			continue
		}
		err := table.Place(filepath.Join(r.out, f.name), func(tmp string) error {
			return table.WriteAttribution(tmp, f.result, f.attribution)
		})
		if err != nil {
			return fmt.Errorf("cannot write results: %w", err)
		}
	}
	if r.policy == nil {
		return nil
	}
	err := table.Place(r.out, func(tmp string) error { return table.WriteVerdicts(tmp, names, verdicts) })
	if err != nil {
		return fmt.Errorf("cannot write results: %w", err)
	}
	return nil
}

// write prints the findings of one result.
func (f *findings) write(w io.Writer) error {
	var b strings.Builder
	for i := range f.verdicts {
		b.WriteString(block("limit", f.verdict(&f.verdicts[i])))
	}
	f.bottlenecks(&b)
	if f.base != nil {
		f.money(&b)
		f.tails(&b)
	}
	_, err := io.WriteString(w, b.String())
	return err
}

// verdict writes a limit, what the run makes of it, and the margin.
func (f *findings) verdict(v *study.Verdict) string {
	result := "kept"
	if !v.Kept {
		result = "BROKEN, first at " + minute(v.FirstBroken)
	}
	return fmt.Sprintf("%s: %s; %s of %s, margin %s (%s, %s)", v.Limit.Name, result,
		f.amount(v.Value, v.Unit), f.amount(v.Allowed, v.Unit), f.amount(v.Margin, v.Unit), v.Limit.Source, v.Limit.Date)
}

// amount writes a verdict's number in its unit.
func (f *findings) amount(x float64, of string) string {
	switch {
	case math.IsNaN(x):
		return "none"
	case of == "m":
		return f.units.Length(x)
	case of == "s":
		return few(x/unit.Minute) + " min"
	case of == "veh/s/lane":
		return f.units.Flow(x) + "/lane"
	}
	return fmt.Sprintf("%g %s", x, of)
}

// bottlenecks writes what became of the bottlenecks, unchanged ones left out.
func (f *findings) bottlenecks(b *strings.Builder) {
	where := axis{f.result.Scenario.Network, f.result.Scenario.Corridors, f.units}
	place := func(p observe.Place) string { return where.place(p.Link, p.At) }
	for i := range f.attribution {
		a := &f.attribution[i]
		if a.What == study.Unchanged && !a.TakesOver {
			continue
		}
		text := fmt.Sprintf("%s %s", place(a.Place), a.What)
		if a.What == study.MovedTo {
			text += " to " + place(a.To)
		}
		text += fmt.Sprintf(": %s queued, %s in the base", hours(a.Alt), hours(a.Base))
		if a.TakesOver {
			text += "; it takes over after the works"
		}
		b.WriteString(block("bottleneck", text))
	}
}

// money writes the road-user cost against the base, where the study gives values.
func (f *findings) money(b *strings.Builder) {
	c := f.Cost
	if c == nil {
		return
	}
	sc, t, base := f.result.Scenario, &f.result.Totals, &f.base.Totals
	m := c.Money(sc.Demand, sc.Horizon, t.Delay-base.Delay, t.Metres-base.Metres)
	b.WriteString(block("cost", fmt.Sprintf("%s %s of delay and distance above the base (%s)", whole(m), c.Currency, c.Source)))
}

// shownTails is how many rows of tails the screen shows before it keeps the farthest of each hour.
const shownTails = 12

// tails writes the farthest tails, with the caution.
func (f *findings) tails(b *strings.Builder) {
	rows := study.Tails(f.result)
	if len(rows) == 0 {
		return
	}
	every := "quarter of an hour"
	if len(rows) > shownTails {
		rows, every = hourly(rows), "hour"
	}
	b.WriteString(hang("", fmt.Sprintf("Where to warn: the farthest tail in each %s (every quarter of an hour in warning.csv), rounded upstream; queued is %s", every, queued(f.result.Criterion, f.units))))
	fmt.Fprintf(b, "%-6s %-10s %14s %9s %9s  %s\n", "from", "tail", "before closure", "grows", "approach", "exits before it")
	for i := range rows {
		b.WriteString(strings.TrimRight(cut(f.tail(&rows[i]), columns), " ") + "\n")
	}
	b.WriteString(block("caution", table.WarningCaution))
}

// hourly keeps the farthest row of each hour and corridor.
func hourly(rows []study.TailRow) []study.TailRow {
	var list []study.TailRow
	for _, row := range rows {
		last := len(list) - 1
		if last < 0 || list[last].Corridor != row.Corridor || math.Floor(list[last].Start/unit.Hour) != math.Floor(row.Start/unit.Hour) {
			list = append(list, row)
		} else if row.X < list[last].X || row.OffMap {
			list[last] = row
		}
	}
	return list
}

// tail writes one row.
func (f *findings) tail(row *study.TailRow) string {
	chain := &f.result.Corridors.Chains[row.Corridor]
	if row.OffMap {
		return fmt.Sprintf("%-6s the queue left the map at the first point of %s", minute(row.Start), chain.Name)
	}
	size, name := unit.Kilometre, "km"
	if f.units == unit.US {
		size, name = unit.Mile, "MP"
	}
	at := table.RoundUpstream(chain.StartAt, row.X, size/10, chain.Descending) / size
	before := "none there"
	if !math.IsNaN(row.Upstream) {
		before = f.units.Length(math.Ceil(row.Upstream/size*10) / 10 * size)
	}
	var exits []string
	for _, e := range row.Exits {
		exits = append(exits, f.result.Scenario.Network.Links[e.Link].Name)
	}
	return fmt.Sprintf("%-6s %-10s %14s %9s %9s  %s", minute(row.Start), fmt.Sprintf("%s %.1f", name, at), before,
		f.units.Speed(row.Growth), f.units.Speed(row.Approach), strings.Join(exits, ", "))
}

// writeVerdicts prints the verdicts of every result.
func writeVerdicts(w io.Writer, list []*findings) error {
	var b strings.Builder
	for _, f := range list {
		b.WriteString("\nLimits, " + f.name + "\n")
		for i := range f.verdicts {
			b.WriteString(block("limit", f.verdict(&f.verdicts[i])))
		}
	}
	_, err := io.WriteString(w, b.String())
	return err
}
