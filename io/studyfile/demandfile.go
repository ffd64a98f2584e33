package studyfile

import (
	"math"
	"slices"
	"strings"

	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// demandPart is a demand file, or the study file where demand stands in it.
type demandPart struct {
	doc  *document
	root *table
}

// demand reads the demand files. It returns nil where there is no network to check them against.
func (d *draft) demand() *demand.Demand {
	parts := d.demandParts()
	dem := &demand.Demand{}
	for _, p := range parts {
		d.classes(p.root, dem)
	}
	if len(dem.Classes) == 0 {
		dem.Classes = []demand.Class{{Name: "vehicle", PCE: 1}}
	}
	if d.network == nil {
		return nil
	}
	for _, p := range parts {
		d.later(p.root, "trips", "routing")
		for _, t := range p.root.tables("entry") {
			d.entry(t, p.doc, dem)
		}
		for _, t := range p.root.tables("turning") {
			d.turning(t, dem)
		}
	}
	if len(dem.Entries) == 0 && len(parts) > 0 && len(d.f.list) == 0 {
		parts[0].root.fault("", "", "the demand has no [[entry]]: nothing travels")
	}
	return dem
}

// demandParts loads the demand files, the study itself first where it holds demand.
func (d *draft) demandParts() []demandPart {
	if d.instead != "" {
		return d.demandFiles([]string{d.instead})
	}
	var parts []demandPart
	for _, key := range []string{"class", "entry", "turning", "trips"} {
		if d.root.has(key) {
			parts = append(parts, demandPart{d.doc, d.root})
			break
		}
	}
	var names []string
	switch d.root.keys["demand"].(type) {
	case nil:
		if parts == nil {
			d.root.fault("", `add demand = "demand.toml"`, "a study needs a `demand`")
		}
	case string:
		names = []string{d.root.text("demand")}
	default:
		names = d.root.texts("demand")
	}
	return append(parts, d.demandFiles(names)...)
}

// demandFiles loads demand files.
func (d *draft) demandFiles(names []string) []demandPart {
	var parts []demandPart
	for _, name := range names {
		line, column := d.doc.position("demand")
		data, ok := d.load(d.file(name), line, column, d.File)
		if !ok {
			continue
		}
		doc, ok := decode(d.file(name), data, d.f)
		if !ok {
			continue
		}
		root := doc.root(d.f)
		root.known("class entry turning trips routing")
		parts = append(parts, demandPart{doc, root})
	}
	return parts
}

// classes reads every [class.NAME], in the order of their names.
func (d *draft) classes(root *table, dem *demand.Demand) {
	t := root.table("class")
	if t == nil {
		return
	}
	for _, name := range sortedKeys(t.keys) {
		s := t.table(name)
		if s == nil {
			continue
		}
		s.known("pce")
		c := demand.Class{Name: name, PCE: s.number("pce", 1)}
		if !(c.PCE > 0) || math.IsInf(c.PCE, 1) {
			s.fault("pce", "", "an equivalent of %g is not possible: it must be above 0", c.PCE)
		}
		if slices.ContainsFunc(dem.Classes, func(o demand.Class) bool { return o.Name == name }) {
			t.fault(name, "", "class `%s` stands in two files", name)
		}
		dem.Classes = append(dem.Classes, c)
	}
}

// entry reads one [[entry]].
func (d *draft) entry(t *table, doc *document, dem *demand.Demand) {
	t.known("link mix start every flow counts column unit factor ramp")
	e := demand.Entry{Link: d.link(t, "link"), Mix: d.mix(t, dem)}
	if t.has("counts") {
		e.Flow = d.counted(t, doc)
	} else {
		for _, key := range []string{"column", "unit"} {
			if t.has(key) {
				t.fault(key, "", "`%s` goes with `counts`", key)
			}
		}
		e.Flow = d.profile(t, true)
	}
	if factor := t.number("factor", 1); !(factor >= 0) || math.IsInf(factor, 1) {
		t.fault("factor", "", "a factor of %g is not possible: it must be 0 or more", factor)
	} else if factor != 1 {
		e.Flow = e.Flow.Scaled(factor)
	}
	dem.Entries = append(dem.Entries, e)
}

// mix reads the shares of the classes.
func (d *draft) mix(t *table, dem *demand.Demand) []float64 {
	mix := make([]float64, len(dem.Classes))
	m := t.table("mix")
	if m == nil {
		mix[0] = 1
		if len(mix) > 1 && !t.has("mix") {
			t.fault("", "", "with several classes an entry needs a `mix`, such as { %s = 0.9, %s = 0.1 }", dem.Classes[0].Name, dem.Classes[1].Name)
		}
		return mix
	}
	sum := 0.0
	names := make([]string, len(dem.Classes))
	for i := range names {
		names[i] = dem.Classes[i].Name
	}
	for _, name := range sortedKeys(m.keys) {
		i := slices.Index(names, name)
		if i < 0 {
			m.fault(name, "classes are `"+strings.Join(names, "`, `")+"`", "there is no class `%s`", name)
			continue
		}
		mix[i] = m.quantity(name, unit.Share, 0)
		if mix[i] < 0 {
			m.fault(name, "", "a share of %g is negative", mix[i])
		}
		sum += mix[i]
	}
	if !m.bad && math.Abs(sum-1) > 1e-6 {
		t.fault("mix", "", "the shares of the mix sum to %.6g: they must sum to 1", sum)
	}
	return mix
}

// profile reads start, every and flow: a constant, or a list that must cover the study period.
func (d *draft) profile(t *table, mayRamp bool) demand.Profile {
	ramp := mayRamp && t.truth("ramp")
	if x, ok := plain(t.keys["flow"]); ok {
		if x < 0 {
			t.fault("flow", "", "a flow of %g veh/h is negative", x)
		}
		return demand.Constant(x * unit.VehPerHour)
	}
	list, ok := t.keys["flow"].([]any)
	if !ok || len(list) == 0 {
		if t.has("flow") {
			t.fault("flow", "", "`flow` must be a number or a list of numbers, veh/h")
		} else {
			t.fault("", "", "`flow` is missing: a number or a list of numbers, veh/h")
		}
		return demand.Profile{}
	}
	values := make([]float64, len(list))
	for i, x := range list {
		v, ok := plain(x)
		if !ok || v < 0 {
			t.fault(indexed("flow", i), "", "value %d of `flow` is %v: it must be a number of veh/h, 0 or more", i+1, x)
		}
		values[i] = v * unit.VehPerHour
	}
	start, every, ok := d.rows(t, "flow", len(list))
	if !ok {
		return demand.Profile{}
	}
	return d.made(t, "flow", start, every, values, ramp)
}

// made makes the profile, with straight lines where asked.
func (d *draft) made(t *table, key string, start, every float64, values []float64, ramp bool) demand.Profile {
	if !ramp || t.bad {
		return demand.Steps(start, every, values)
	}
	p, err := demand.Ramped(start, every, values)
	if err != nil {
		t.fault("ramp", "leave `ramp` out, or use shorter intervals", "%v", err)
	}
	return p
}

// rows reads start and every of a list and checks that it covers the study period.
func (d *draft) rows(t *table, key string, count int) (start, every float64, ok bool) {
	for _, k := range []string{"start", "every"} {
		if !t.has(k) {
			t.fault("", "", "a list of `%s` needs `%s`", key, k)
		}
	}
	start, every = t.clock("start", 0), t.quantity("every", unit.Duration, 0)
	if t.bad {
		return 0, 0, false
	}
	if !(every > 0) {
		t.fault("every", "", "`every` must be a duration above 0, such as \"60 min\"")
		return 0, 0, false
	}
	return start, every, d.covers(t, key, start, start+every*float64(count))
}

// covers checks that a list from one time to another covers the study period.
func (d *draft) covers(t *table, key string, from, to float64) bool {
	h := &d.Base.Horizon
	if from <= h.Start+1e-6 && to >= h.End-1e-6 {
		return true
	}
	t.fault(key, "", "`%s` covers %s to %s, but the study runs from %s to %s: it must cover the whole period",
		key, altClock(from), altClock(to), altClock(h.Start), altClock(h.End))
	return false
}

// approach is what one [[turning]] speaks of.
type approach struct {
	from  network.LinkID
	class demand.ClassID
}

// turning reads one [[turning]].
func (d *draft) turning(t *table, dem *demand.Demand) {
	t.known("node from to class start every")
	turn := demand.Turning{Node: d.node(t, "node"), From: d.link(t, "from"), Class: demand.AllClasses}
	if name := t.text("class"); name != "" {
		turn.Class = demand.ClassID(slices.IndexFunc(dem.Classes, func(c demand.Class) bool { return c.Name == name }))
		if turn.Class < 0 {
			t.fault("class", "", "there is no class `%s`", name)
		}
	}
	to := t.table("to")
	if to == nil {
		if !t.has("to") {
			t.fault("", "", "`to` is missing: the share of each way out, such as { E3 = 0.86, X3 = 0.14 }")
		}
		return
	}
	n := d.network
	if turn.Node >= 0 && turn.From >= 0 && n.Links[turn.From].To != turn.Node {
		t.fault("from", d.approaches(turn.Node), "link `%s` does not end at node `%s`", n.Links[turn.From].Name, n.Nodes[turn.Node].Name)
	}
	rows := d.fractions(t, to, &turn)
	if key := (approach{turn.From, turn.Class}); turn.From >= 0 {
		if d.turned[key] {
			t.fault("from", "", "link `%s` has its turning fractions twice", n.Links[turn.From].Name)
		}
		d.turned[key] = true
	}
	if t.bad || to.bad {
		return
	}
	if rows > 1 {
		var ok bool
		if turn.Start, turn.Every, ok = d.rows(t, "to", rows); !ok {
			return
		}
	}
	dem.Turnings = append(dem.Turnings, turn)
}

// fractions reads the shares of each way out, one or a list of each, and returns the number of rows.
func (d *draft) fractions(t, to *table, turn *demand.Turning) int {
	n := d.network
	rows := 1
	for _, name := range sortedKeys(to.keys) {
		if list, ok := to.keys[name].([]any); ok {
			rows = max(rows, len(list))
		}
	}
	turn.Fractions = make([][]float64, rows)
	for _, name := range sortedKeys(to.keys) {
		l, ok := n.Link(name)
		if !ok || turn.Node >= 0 && n.Links[l].From != turn.Node {
			to.fault(name, d.ways(turn.Node), "link `%s` does not begin at the node", name)
			continue
		}
		turn.To = append(turn.To, l)
		d.column(to, name, turn.Fractions)
	}
	for row := range turn.Fractions {
		sum := 0.0
		for _, x := range turn.Fractions[row] {
			sum += x
		}
		if !to.bad && math.Abs(sum-1) > 1e-6 {
			where := ""
			if rows > 1 {
				where = " in row " + altNumber(row+1)
			}
			t.fault("to", "", "the fractions%s sum to %.7g: they must sum to 1", where, sum)
		}
	}
	return rows
}

// column reads one way out's share, a number for all rows or a list of one each.
func (d *draft) column(to *table, name string, rows [][]float64) {
	list, isList := to.keys[name].([]any)
	if isList && len(list) != len(rows) {
		to.fault(name, "", "`%s` has %d fractions where another way out has %d", name, len(list), len(rows))
		return
	}
	one := 0.0
	if !isList {
		one = to.quantity(name, unit.Share, 0)
	}
	for i := range rows {
		x := one
		if isList {
			v, ok := plain(list[i])
			if !ok {
				to.fault(name, "", "fraction %d of `%s` is %v: it must be a number from 0 to 1", i+1, name, list[i])
			}
			x = v
		}
		if x < 0 || x > 1 {
			to.fault(name, "", "a fraction of %g is not possible: 0 to 1", x)
		}
		rows[i] = append(rows[i], x)
	}
}

// ways lists the links that begin at a node.
func (d *draft) ways(node network.NodeID) string {
	if node < 0 {
		return ""
	}
	names := []string{}
	for _, l := range d.network.Out(node) {
		names = append(names, "`"+d.network.Links[l].Name+"`")
	}
	return "there begin " + strings.Join(names, ", ")
}
