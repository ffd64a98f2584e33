package observe

import (
	"slices"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
)

// cluster is one standing queue at one moment: runs of queued cells that touch each other across nodes.
type cluster struct {
	runs     []Run
	head     Run              // the run at the downstream end of the longest branch
	tail     Run              // the run at its upstream end
	branch   []network.LinkID // links of the longest branch, downstream to upstream
	length   float64          // m, head to tail along the longest branch
	vehicles float64
	held     float64
}

// joiner makes clusters of runs. It keeps scratch.
type joiner struct {
	parent []int
	up     [][]int   // by run: runs that touch it from upstream
	far    []float64 // by run: length of the longest branch that ends with it, 0 unknown
	via    []int     // by run: the next run upstream on that branch, -1 none
	open   []bool    // by run: on the path being followed, so that rings end
}

// join groups runs: one that ends at a node with those that begin there, and, where a node has one way out, all
// that end there, for they wait for the same place.
func (j *joiner) join(v ctm.View, f *Finder, runs []Run) []cluster {
	n := v.Scenario().Network
	if len(runs) == 0 {
		return nil
	}
	j.reset(len(runs))
	for i := range runs {
		if runs[i].AtEnd {
			j.joinAt(n, f, i)
		}
	}
	byRoot := make(map[int]int)
	var list []cluster
	for i := range runs {
		root := j.root(i)
		at, known := byRoot[root]
		if !known {
			at = len(list)
			byRoot[root] = at
			list = append(list, cluster{})
		}
		c := &list[at]
		c.runs = append(c.runs, runs[i])
		c.vehicles += runs[i].Vehicles
		c.held += runs[i].Held
	}
	for i := range runs {
		j.extend(&list[byRoot[j.root(i)]], runs, i)
	}
	return list
}

func (j *joiner) reset(n int) {
	j.parent, j.far, j.via, j.open = j.parent[:0], j.far[:0], j.via[:0], j.open[:0]
	for len(j.up) < n {
		j.up = append(j.up, nil)
	}
	for i := range n {
		j.parent, j.far, j.via, j.open = append(j.parent, i), append(j.far, 0), append(j.via, -1), append(j.open, false)
		j.up[i] = j.up[i][:0]
	}
}

// joinAt joins a run that touches its link's downstream end with the runs beyond and beside it.
func (j *joiner) joinAt(n *network.Network, f *Finder, i int) {
	node := n.Links[f.runs[i].Link].To
	for _, out := range n.Out(node) {
		if d := f.begin(out); d >= 0 {
			j.parent[j.root(i)] = j.root(d)
			j.up[d] = append(j.up[d], i)
		}
	}
	if len(n.Out(node)) != 1 {
		return
	}
	for _, in := range n.In(node) {
		if k := f.last(in); k >= 0 {
			j.parent[j.root(k)] = j.root(i)
		}
	}
}

func (j *joiner) root(i int) int {
	for j.parent[i] != i {
		i = j.parent[i]
	}
	return i
}

// extend makes the branch that ends downstream with run i the cluster's if it is the longest so far. Only runs
// with nothing queued beyond them are ends, or any where the queue closes a ring.
func (j *joiner) extend(c *cluster, runs []Run, i int) {
	length := j.follow(runs, i)
	if length <= c.length*(1+1e-12) {
		return
	}
	c.length, c.head, c.branch = length, runs[i], c.branch[:0]
	for k := i; k >= 0; k = j.via[k] {
		c.branch = append(c.branch, runs[k].Link)
		c.tail = runs[k]
		if len(c.branch) > len(runs) {
			break
		}
	}
}

// follow is the length of the longest branch that ends downstream with run i.
func (j *joiner) follow(runs []Run, i int) float64 {
	if j.far[i] > 0 {
		return j.far[i]
	}
	j.open[i] = true
	best := 0.0
	for _, k := range j.up[i] {
		if j.open[k] {
			continue
		}
		if l := j.follow(runs, k); l > best {
			best, j.via[i] = l, k
		}
	}
	j.open[i] = false
	j.far[i] = best + max(runs[i].Length(), 1e-9)
	return j.far[i]
}

// last is the number of the run that touches a link's downstream end, -1 for none.
func (f *Finder) last(link network.LinkID) int {
	i := f.first[link+1] - 1
	if i >= f.first[link] && f.runs[i].AtEnd {
		return i
	}
	return -1
}

// begin is the number of the run that touches a link's upstream end, -1 for none.
func (f *Finder) begin(link network.LinkID) int {
	i := f.first[link]
	if i < f.first[link+1] && f.runs[i].AtStart {
		return i
	}
	return -1
}

// overlap counts the cells that two lists of runs share.
func overlap(a, b []Run) int {
	sum := 0
	for i := range a {
		for k := range b {
			if a[i].Link == b[k].Link {
				sum += max(0, min(a[i].Last, b[k].Last)-max(a[i].First, b[k].First)+1)
			}
		}
	}
	return sum
}

// holds reports whether a cell is in one of the runs.
func holds(runs []Run, cell int) bool {
	return slices.ContainsFunc(runs, func(r Run) bool { return r.First <= cell && cell <= r.Last })
}

// links lists the links of the runs in their order, each once.
func links(runs []Run) []network.LinkID {
	var list []network.LinkID
	for i := range runs {
		if len(list) == 0 || list[len(list)-1] != runs[i].Link {
			list = append(list, runs[i].Link)
		}
	}
	return list
}
