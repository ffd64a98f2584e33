package studyfile

import (
	"errors"
	"fmt"
	"io/fs"
	"os"

	"example.org/tailback/ctm/study"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// Policy is a file of limits.
type Policy struct {
	Title  string
	Limits []study.Limit
}

// limitKeys lists the keys of each kind of limit beside name, kind, source and date; the first one is required.
var limitKeys = map[string]string{
	study.QueueLimit: "length for",
	study.DelayLimit: "per_vehicle above_normal",
	study.FlowLimit:  "per_lane",
	study.LanesLimit: "open",
	study.ReachLimit: "nodes",
}

// ReadPolicy reads a policy file whose nodes are those of a network. The error is Errors, all mistakes at once.
func ReadPolicy(path string, n *network.Network) (*Policy, error) {
	f := &faults{}
	data, err := os.ReadFile(path)
	if err != nil {
		var e *fs.PathError
		if errors.As(err, &e) {
			err = e.Err
		}
		f.add(path, 0, 0, fmt.Sprintf("cannot read the policy: %v", err), "")
		return nil, f.err()
	}
	return readPolicy(path, data, n, f)
}

func readPolicy(path string, data []byte, n *network.Network, f *faults) (*Policy, error) {
	doc, ok := decode(path, data, f)
	if !ok {
		return nil, f.err()
	}
	root := doc.root(f)
	root.known("title limit")
	p := &Policy{Title: root.text("title")}
	d := &draft{network: n, f: f}
	names := make(map[string]bool)
	for _, t := range root.tables("limit") {
		l := d.limit(t)
		if l.Name != "" && names[l.Name] {
			t.fault("name", "", "two limits are named `%s`", l.Name)
		}
		names[l.Name] = true
		p.Limits = append(p.Limits, l)
	}
	if len(p.Limits) == 0 && len(f.list) == 0 {
		f.add(path, 0, 0, "the policy has no [[limit]]", "")
	}
	if err := f.err(); err != nil {
		return nil, err
	}
	return p, nil
}

// limit reads one [[limit]].
func (d *draft) limit(t *table) study.Limit {
	l := study.Limit{Name: t.text("name"), Kind: t.text("kind"), Source: t.text("source"), Date: t.text("date")}
	for key, value := range map[string]string{"name": l.Name, "source": l.Source, "date": l.Date} {
		if value == "" {
			t.fault(at(t, key), "", "a limit needs a `%s`", key)
		}
	}
	keys, ok := limitKeys[l.Kind]
	if !ok {
		t.fault(at(t, "kind"), "it is queue, delay, flow, lanes or reach", "`%s` is no kind of limit", l.Kind)
		return l
	}
	t.known("name kind source date " + keys)
	switch l.Kind {
	case study.QueueLimit:
		l.Length, l.For = t.quantity("length", unit.Length, 0), t.quantity("for", unit.Duration, 0)
		d.needs(t, "length", `"0.75 mi"`)
	case study.DelayLimit:
		l.PerVehicle, l.AboveNormal = t.quantity("per_vehicle", unit.Duration, 0), t.truth("above_normal")
		d.needs(t, "per_vehicle", `"15 min"`)
	case study.FlowLimit:
		l.PerLane = t.quantity("per_lane", unit.FlowPerLane, 0)
		d.needs(t, "per_lane", `"1400 veh/h/lane"`)
	case study.LanesLimit:
		l.Open = t.number("open", 0)
		d.needs(t, "open", "2")
		if !(l.Open >= 0) || l.Open > 100 {
			t.fault("open", "", "%g lanes cannot stay open: a number from 0", l.Open)
		}
	case study.ReachLimit:
		l.Nodes = d.nodesOf(t)
	}
	return l
}

// at is a key where it stands in a table, else "" for the table itself.
func at(t *table, key string) string {
	if t.has(key) {
		return key
	}
	return ""
}

func (d *draft) needs(t *table, key, example string) {
	if !t.has(key) {
		t.fault("", fmt.Sprintf("add %s = %s", key, example), "a limit of this kind needs `%s`", key)
	}
}

// nodesOf reads the nodes of a reach limit.
func (d *draft) nodesOf(t *table) []network.NodeID {
	d.needs(t, "nodes", `["N7"]`)
	var list []network.NodeID
	known := make([]string, len(d.network.Nodes))
	for i := range known {
		known[i] = d.network.Nodes[i].Name
	}
	names := t.texts("nodes")
	for _, name := range names {
		id, ok := d.network.Node(name)
		if !ok {
			t.fault("nodes", meant(name, known), "the network has no node `%s`", name)
			continue
		}
		list = append(list, id)
	}
	if t.has("nodes") && len(names) == 0 && !t.bad {
		t.fault("nodes", "", "`nodes` must name at least one node")
	}
	return list
}
