package network

import (
	"errors"
	"strings"
	"testing"

	"example.org/tailback/network/diagram"
)

func straight(t *testing.T) diagram.Diagram {
	t.Helper()
	d, err := diagram.New("triangular", diagram.Params{FreeSpeed: 25, WaveSpeed: 5, JamDensity: 0.12})
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func names(list ...string) []Node {
	nodes := make([]Node, len(list))
	for i := range list {
		nodes[i].Name = list[i]
	}
	return nodes
}

func TestNewReportsEverything(t *testing.T) {
	d := straight(t)
	_, err := New(names("a", "b", "a"), []Link{
		{Name: "1", From: 0, To: 1, Length: 100, Lanes: 1, Diagram: d},
		{Name: "1", From: 0, To: 1, Length: 100, Lanes: 1, Diagram: d},
		{Name: "", From: 0, To: 1, Length: 100, Lanes: 1, Diagram: d},
		{Name: "3", From: 0, To: 7, Length: 100, Lanes: 1, Diagram: d},
		{Name: "4", From: 0, To: 1, Length: 0, Lanes: 1, Diagram: d},
		{Name: "5", From: 0, To: 1, Length: 100, Lanes: -1, Diagram: d},
		{Name: "6", From: 0, To: 1, Length: 100, Lanes: 1},
	})
	var list Problems
	if !errors.As(err, &list) {
		t.Fatalf("got %v", err)
	}
	want := []string{
		"node `a` stands twice (first as node 1)", "link `1` stands twice (first as link 1)", "a link has no id",
		"link `3` ends at node number 8 of 3", "link `4` has length 0 m: it must be positive",
		"link `5` has -1 lanes: it must have more than 0", "link `6` has no fundamental diagram",
	}
	if got := list.Error(); got != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", got, strings.Join(want, "\n"))
	}
}

// a -1-> b -2-> c, d -3-> b; e -4-> f -5-> e is a ring that nothing feeds and that leads nowhere.
func ring(t *testing.T) *Network {
	d := straight(t)
	link := func(name string, from, to NodeID) Link {
		return Link{Name: name, From: from, To: to, Length: 1000, Lanes: 2, Diagram: d}
	}
	n, err := New(names("a", "b", "c", "d", "e", "f"), []Link{link("1", 0, 1), link("2", 1, 2), link("3", 3, 1), link("4", 4, 5), link("5", 5, 4)})
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func TestGraph(t *testing.T) {
	n := ring(t)
	if len(n.In(1)) != 2 || len(n.Out(1)) != 1 || len(n.Out(2)) != 0 {
		t.Errorf("in and out of b: %v %v, out of c: %v", n.In(1), n.Out(1), n.Out(2))
	}
	if l, ok := n.Link("3"); !ok || l != 2 {
		t.Errorf("link 3 is %v, %v", l, ok)
	}
	if _, ok := n.Node("g"); ok {
		t.Error("there is no node g")
	}
	if !n.IsExit(1) || n.IsExit(0) {
		t.Error("link 2 is the exit, link 1 is not")
	}
	if got := n.Links[0].FreeTime(); got != 40 { // 1000 m at 25 m/s
		t.Errorf("free time %v s, want 40", got)
	}
	if got := n.Links[0].Capacity(); got < 0.9999 || got > 1.0001 { // 2 lanes x 25*5*0.12/30 = 0.5 veh/s
		t.Errorf("capacity %v veh/s, want 1", got)
	}
}

func TestCheckReach(t *testing.T) {
	n := ring(t)
	if p := n.CheckReach([]LinkID{0, 2}); len(p) != 4 {
		t.Errorf("the ring's links are not fed and lead nowhere: got %v", p)
	}
	p := n.CheckReach([]LinkID{0, 3})
	want := "link `3` cannot be reached from any entry\nlink `4` does not lead to any exit\nlink `5` does not lead to any exit"
	if p.Error() != want {
		t.Errorf("got\n%v\nwant\n%s", p, want)
	}
}

func TestCorridor(t *testing.T) {
	n := ring(t)
	c := Corridor{Name: "A", Links: []LinkID{0, 1}, StartAt: 5000, Chained: true}
	if err := c.Check(n); err != nil {
		t.Fatal(err)
	}
	if x, ok := c.Place(n, 1, 250); !ok || x != 6250 {
		t.Errorf("chainage %v, %v; want 6250", x, ok)
	}
	c.Descending = true
	if x, _ := c.Place(n, 1, 250); x != 3750 {
		t.Errorf("descending chainage %v, want 3750", x)
	}
	if _, ok := c.Place(n, 3, 0); ok {
		t.Error("link 4 is not on it")
	}
	if c.Length(n) != 2000 {
		t.Errorf("length %v, want 2000", c.Length(n))
	}
	for _, bad := range []struct {
		links []LinkID
		want  string
	}{
		{nil, "corridor `A` has no links"},
		{[]LinkID{1, 0}, "corridor `A` breaks between `2` and `1`: the first ends at node `c`, the second begins at node `a`"},
		{[]LinkID{3, 4, 3}, "corridor `A` names link `4` twice"},
	} {
		c := Corridor{Name: "A", Links: bad.links}
		if err := c.Check(n); err == nil || err.Error() != bad.want {
			t.Errorf("%v: got %v, want %s", bad.links, err, bad.want)
		}
	}
}
