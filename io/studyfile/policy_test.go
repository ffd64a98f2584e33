package studyfile

import (
	"path/filepath"
	"strings"
	"testing"

	"example.org/tailback/ctm/study"
)

const goodPolicy = `title = "Example"
[[limit]]
name = "short queue"
kind = "queue"
length = "0.75 mi"
for = "120 min"
source = "manual"
date = "2024-05"
[[limit]]
name = "delay"
kind = "delay"
per_vehicle = "15 min"
above_normal = true
source = "manual"
date = "2024-05"
[[limit]]
name = "demand"
kind = "flow"
per_lane = "1350 veh/h/lane"
source = "manual"
date = "2024-05"
[[limit]]
name = "lanes"
kind = "lanes"
open = 2
source = "manual"
date = "2024-05"
[[limit]]
name = "free"
kind = "reach"
nodes = ["N2", "N3"]
source = "manual"
date = "2024-05"
`

func TestReadPolicy(t *testing.T) {
	n := corridor(t).Network
	p, err := readPolicy("p.toml", []byte(goodPolicy), n, &faults{})
	if err != nil {
		t.Fatal(err)
	}
	if p.Title != "Example" || len(p.Limits) != 5 {
		t.Fatalf("%+v", p)
	}
	// 0.75 mi is 1207.008 m, the mile being 1609.344 m.
	if l := p.Limits[0]; l.Kind != study.QueueLimit || l.Length != 1207.008 || l.For != 7200 || l.Source != "manual" || l.Date != "2024-05" {
		t.Errorf("%+v", l)
	}
	if l := p.Limits[1]; l.PerVehicle != 900 || !l.AboveNormal {
		t.Errorf("%+v", l)
	}
	if l := p.Limits[2]; l.PerLane != 0.375 {
		t.Errorf("%+v", l)
	}
	if l := p.Limits[3]; l.Open != 2 {
		t.Errorf("%+v", l)
	}
	if l := p.Limits[4]; len(l.Nodes) != 2 || n.Nodes[l.Nodes[1]].Name != "N3" {
		t.Errorf("%+v", l)
	}
}

// Each replacement in the good policy must be reported with the line of what is wrong.
func TestPolicyFaults(t *testing.T) {
	n := corridor(t).Network
	for _, c := range []struct{ old, put, want string }{
		{`kind = "queue"`, `kind = "length"`, "p.toml:4:1: `length` is no kind of limit\n  hint: it is queue, delay, flow, lanes or reach"},
		{`length = "0.75 mi"`, ``, "p.toml:2:3: a limit of this kind needs `length`"},
		{`length = "0.75 mi"`, `length = "0.75 min"`, "p.toml:5:1: `length`: "},
		{`length = "0.75 mi"`, `length = "0.75 mi"` + "\nnodes = []", "p.toml:6:1: unknown key `nodes`"},
		{`for = "120 min"`, `fore = "120 min"`, "did you mean `for`?"},
		{`name = "delay"`, `name = "short queue"`, "p.toml:10:1: two limits are named `short queue`"},
		{`above_normal = true`, `above_normal = "yes"`, "p.toml:13:1: `above_normal` must be true or false"},
		{`per_lane = "1350 veh/h/lane"`, `per_lane = 1350`, "needs a unit in quotes"},
		{`open = 2`, `open = -1`, "p.toml:25:1: -1 lanes cannot stay open"},
		{`nodes = ["N2", "N3"]`, `nodes = ["N2", "M3"]`, "p.toml:31:1: the network has no node `M3`\n  hint: did you mean `N3`?"},
		{`nodes = ["N2", "N3"]`, `nodes = []`, "p.toml:31:1: `nodes` must name at least one node"},
		{`nodes = ["N2", "N3"]`, ``, "a limit of this kind needs `nodes`"},
		{"source = \"manual\"\ndate = \"2024-05\"\n[[limit]]\nname = \"delay\"", "\n\n[[limit]]\nname = \"delay\"", "p.toml:2:3: a limit needs a `source`"},
		{`title = "Example"`, `titel = "Example"`, "p.toml:1:1: unknown key `titel`\n  hint: did you mean `title`?"},
		{`[[limit]]`, `[[limits]]`, "unknown key `limits`"},
		{`title = "Example"`, `title = `, "p.toml:1:"},
	} {
		text := strings.Replace(goodPolicy, c.old, c.put, 1)
		_, err := readPolicy("p.toml", []byte(text), n, &faults{})
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s -> %s: %v\nwant %q", c.old, c.put, err, c.want)
		}
	}
	if _, err := readPolicy("p.toml", nil, n, &faults{}); err == nil || !strings.Contains(err.Error(), "the policy has no [[limit]]") {
		t.Errorf("an empty file: %v", err)
	}
	if _, err := ReadPolicy(filepath.Join(t.TempDir(), "none.toml"), n); err == nil || !strings.Contains(err.Error(), "cannot read the policy") {
		t.Errorf("no file: %v", err)
	}
}

// The shipped examples can be read, say that they are examples, and name nobody.
func TestExamplePolicies(t *testing.T) {
	files, err := filepath.Glob(filepath.Join("..", "..", "testdata", "policies", "*.toml"))
	if err != nil || len(files) < 2 {
		t.Fatalf("%d example policies (%v), want at least 2", len(files), err)
	}
	for _, file := range files {
		p, err := ReadPolicy(file, corridor(t).Network)
		if err != nil {
			t.Error(err)
			continue
		}
		for _, l := range p.Limits {
			if !strings.Contains(l.Source, "example") {
				t.Errorf("%s: the limit `%s` is not marked as an example", file, l.Name)
			}
		}
	}
}

// Whatever a policy holds, reading it ends, and an error names the file.
func FuzzReadPolicy(f *testing.F) {
	f.Add([]byte(goodPolicy))
	f.Add([]byte("[[limit]]\nkind = 3\nnodes = [[1]]"))
	f.Add([]byte("limit = 1"))
	f.Fuzz(func(t *testing.T, data []byte) {
		if _, err := readPolicy("p.toml", data, corridor(t).Network, &faults{}); err != nil && !strings.HasPrefix(err.Error(), "p.toml") {
			t.Errorf("%v", err)
		}
	})
}
