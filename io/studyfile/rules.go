package studyfile

import (
	"example.org/tailback/ctm"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// link finds the link that a key names; -1 after a fault.
func (d *draft) link(t *table, key string) network.LinkID {
	name := t.text(key)
	if name == "" {
		if !t.has(key) {
			t.fault("", "", "`%s` is missing: it names a link", key)
		}
		return -1
	}
	return d.named(t, key, name)
}

// named finds a link by its name; -1 after a fault.
func (d *draft) named(t *table, key, name string) network.LinkID {
	if l, ok := d.network.Link(name); ok {
		return l
	}
	names := make([]string, len(d.network.Links))
	for i := range names {
		names[i] = d.network.Links[i].Name
	}
	t.fault(key, meant(name, names), "the network has no link `%s`", name)
	return -1
}

// node finds the node that a key names; -1 after a fault.
func (d *draft) node(t *table, key string) network.NodeID {
	name := t.text(key)
	if name == "" {
		if !t.has(key) {
			t.fault("", "", "`%s` is missing: it names a node", key)
		}
		return -1
	}
	if n, ok := d.network.Node(name); ok {
		return n
	}
	names := make([]string, len(d.network.Nodes))
	for i := range names {
		names[i] = d.network.Nodes[i].Name
	}
	t.fault(key, meant(name, names), "the network has no node `%s`", name)
	return -1
}

// meant is a hint with the nearest known word, "" without one.
func meant(word string, known []string) string {
	if near := nearest(word, known); near != "" {
		return "did you mean `" + near + "`?"
	}
	return ""
}

// corridors reads every [[corridor]].
func (d *draft) corridors() []network.Corridor {
	var list []network.Corridor
	for _, t := range d.root.tables("corridor") {
		t.known("name links start_at descending")
		c := network.Corridor{
			Name: t.text("name"), StartAt: t.quantity("start_at", unit.Length, 0),
			Descending: t.truth("descending"), Chained: t.has("start_at"),
		}
		if c.Name == "" && !t.bad {
			t.fault("", "", "a corridor needs a `name`")
		}
		for _, name := range t.texts("links") {
			if l := d.named(t, "links", name); l >= 0 {
				c.Links = append(c.Links, l)
			}
		}
		if !t.bad {
			if err := c.Check(d.network); err != nil {
				t.fault("links", "", "%v", err)
			}
		}
		for _, other := range list {
			if other.Name == c.Name {
				t.fault("name", "", "two corridors are named `%s`", c.Name)
			}
		}
		list = append(list, c)
	}
	return list
}

// junctions reads every [[junction]].
func (d *draft) junctions() []ctm.Junction {
	var list []ctm.Junction
	for _, t := range d.root.tables("junction") {
		t.known("node priority queueing")
		j := ctm.Junction{Node: d.node(t, "node")}
		switch q := t.text("queueing"); q {
		case "", "fifo":
		case "by-movement":
			t.fault("queueing", `use "fifo"`, "`by-movement` is not available in this version of tailback")
		default:
			t.fault("queueing", "", "`%s` is no way to queue: it is \"fifo\"", q)
		}
		if p := t.table("priority"); p != nil && j.Node >= 0 {
			j.Priority = d.priority(t, p, j.Node)
		}
		for _, other := range list {
			if other.Node == j.Node && j.Node >= 0 {
				t.fault("node", "put both into one", "node `%s` has two [[junction]] tables", d.network.Nodes[j.Node].Name)
			}
		}
		list = append(list, j)
	}
	return list
}

// priority reads the merge priorities of a node: of each link that ends there.
func (d *draft) priority(t, p *table, node network.NodeID) map[network.LinkID]float64 {
	list := make(map[network.LinkID]float64)
	for _, name := range sortedKeys(p.keys) {
		l, ok := d.network.Link(name)
		x, number := plain(p.keys[name])
		switch {
		case !ok || d.network.Links[l].To != node:
			p.fault(name, d.approaches(node), "link `%s` does not end at node `%s`", name, d.network.Nodes[node].Name)
		case !number || !(x > 0):
			p.fault(name, "", "a priority must be a number above 0, found %v", p.keys[name])
		default:
			list[l] = x
		}
	}
	if !p.bad && len(list) < len(d.network.In(node)) {
		t.fault("priority", d.approaches(node), "priorities count against each other: give one to every link that ends at node `%s`", d.network.Nodes[node].Name)
	}
	return list
}

// approaches lists the links that end at a node.
func (d *draft) approaches(node network.NodeID) string {
	text := "there end"
	for i, l := range d.network.In(node) {
		if i > 0 {
			text += ","
		}
		text += " `" + d.network.Links[l].Name + "`"
	}
	return text
}

// outflows reads every [[outflow]].
func (d *draft) outflows() []ctm.Outflow {
	var list []ctm.Outflow
	for _, t := range d.root.tables("outflow") {
		t.known("link start every flow")
		o := ctm.Outflow{Link: d.link(t, "link")}
		if o.Link >= 0 && !d.network.IsExit(o.Link) {
			t.fault("link", "an exit is a link whose end node has no way out", "link `%s` is no exit", d.network.Links[o.Link].Name)
		}
		for _, other := range list {
			if other.Link == o.Link && o.Link >= 0 {
				t.fault("link", "", "link `%s` has two outflow limits", d.network.Links[o.Link].Name)
			}
		}
		o.Flow = d.profile(t, false)
		list = append(list, o)
	}
	return list
}
