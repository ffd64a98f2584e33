package studyfile

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// faultless is a study without fault: an entry, a diverge, two exits.
var faultless = map[string]string{
	"study.toml": `title = "good"
network = "network.geojson"
demand = "demand.toml"
[time]
start = "06:00"
end = "08:00"
cell = "100 m"
[diagram.default]
shape = "triangular"
free_speed = "100 km/h"
capacity = "2000 veh/h/lane"
jam_density = "120 veh/km/lane"
[[corridor]]
name = "A"
links = ["E1", "E2"]
`,
	"demand.toml": `[[entry]]
link = "E1"
start = "06:00"
every = "60 min"
flow = [900, 1200]
[[turning]]
node = "N2"
from = "E1"
to = { E2 = 0.9, X2 = 0.1 }
`,
	"network.geojson": `{"type": "FeatureCollection", "features": [
{"type": "Feature", "properties": {"id": "N2"}, "geometry": {"type": "Point", "coordinates": [-40.00, 12.02]}},
{"type": "Feature", "properties": {"id": "E1", "lanes": 2, "from": "N1", "to": "N2"}, "geometry": {"type": "LineString", "coordinates": [[-40.0, 12.00], [-40.0, 12.02]]}},
{"type": "Feature", "properties": {"id": "E2", "lanes": 2, "from": "N2", "to": "N3"}, "geometry": {"type": "LineString", "coordinates": [[-40.0, 12.02], [-40.0, 12.04]]}},
{"type": "Feature", "properties": {"id": "X2", "lanes": 1, "from": "N2", "to": "N4"}, "geometry": {"type": "LineString", "coordinates": [[-40.0, 12.02], [-40.01, 12.03]]}}
]}
`,
	"counts.csv": "time,E1\n06:00,900\n07:00,1200\n",
}

// write puts a study into a folder, with one text replaced, and returns the study file.
func write(t testing.TB, file, old, text string) string {
	t.Helper()
	dir := t.TempDir()
	for name, content := range faultless {
		if name == file {
			if !strings.Contains(content, old) {
				t.Fatalf("%s does not hold %q", name, old)
			}
			content = strings.Replace(content, old, text, 1)
		}
		if err := os.WriteFile(filepath.Join(dir, name), []byte(content), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return filepath.Join(dir, "study.toml")
}

func TestGoodStudy(t *testing.T) {
	for _, ends := range []string{"\n", "\r\n"} { // also as written on other systems, with a byte-order mark
		dir := t.TempDir()
		for name, content := range faultless {
			content = strings.ReplaceAll(content, "\n", ends)
			if ends != "\n" {
				content = "\ufeff" + content
			}
			if err := os.WriteFile(filepath.Join(dir, name), []byte(content), 0o666); err != nil {
				t.Fatal(err)
			}
		}
		s, err := Read(dir) // a folder stands for its study.toml
		if err != nil {
			t.Fatal(err)
		}
		if len(s.Inputs) != 3 || len(s.Inputs[0].SHA256) != 64 || s.Inputs[1].Name != "network.geojson" {
			t.Errorf("inputs %v", s.Inputs)
		}
		if len(s.Warnings) != 0 {
			t.Errorf("warnings %q", s.Warnings)
		}
	}
}

// Every mistake with the whole message it must give: file, line, column, what was found, what is possible.
func TestBadInput(t *testing.T) {
	const study, dem, net, counts = "study.toml", "demand.toml", "network.geojson", "counts.csv"
	counted := "link = \"E1\"\ncounts = \"counts.csv\"\ncolumn = \"E1\"\nunit = \"veh\"\n"
	listed := "link = \"E1\"\nstart = \"06:00\"\nevery = \"60 min\"\nflow = [900, 1200]\n"
	for _, c := range []struct{ file, old, text, want string }{
		// The study file.
		{study, `title = "good"`, `title = good`, "study.toml:1:9: this is not TOML: "},
		{study, `title = "good"`, "title = \"a\"\ntitle = \"b\"", "study.toml:2:1: this is not TOML: "},
		{study, `title = "good"`, "title = \"good\"\nnetwrk = 1", "study.toml:2:1: unknown key `netwrk`\n  hint: did you mean `network`?"},
		{study, `title = "good"`, `title = 7`, "study.toml:1:1: `title` must be a text in quotes, found 7"},
		{study, `network = "network.geojson"`, ``, "study.toml: a study needs a `network`\n  hint: add network = \"network.geojson\""},
		{study, `network = "network.geojson"`, `network = "roads.geojson"`, "study.toml:2:1: cannot read `DIR/roads.geojson`: no such file or directory"},
		{study, `demand = "demand.toml"`, ``, "study.toml: a study needs a `demand`\n  hint: add demand = \"demand.toml\""},
		{study, `demand = "demand.toml"`, `demand = ["demand.toml", "more.toml"]`, "study.toml:3:1: cannot read `DIR/more.toml`: no such file or directory"},
		{study, "[time]\n", "[tme]\n", "study.toml:4:2: unknown key `tme`\n  hint: did you mean `time`?"},
		{study, `start = "06:00"`, `start = "6 am"`, "study.toml:5:1: `start`: `6 am` is no clock time: use HH:MM or HH:MM:SS, with hours past 24 for the following day"},
		{study, `end = "08:00"`, `end = "05:00"`, "study.toml:6:1: the period ends at 05:00, not after its start at 06:00\n  hint: hours run past 24 for the following day: 05:00 of day 2 is \"29:00\""},
		{study, `end = "08:00"`, ``, "study.toml:4:2: [time] needs `end`, such as \"05:00\""},
		{study, `cell = "100 m"`, `cell = "100"`, "study.toml:7:1: `cell`: `100` has no unit: use m, km, mi or ft"},
		{study, `cell = "100 m"`, `cell = 100`, "study.toml:7:1: `cell` needs a unit in quotes, such as \"300 m\""},
		{study, `cell = "100 m"`, `cell = "100 km/h"`, "study.toml:7:1: `cell`: `100 km/h` is no length: use m, km, mi or ft"},
		{study, `cell = "100 m"`, `cell = "-5 m"`, "study.toml:7:1: `cell`: `-5 m` is negative: it must be 0 or more"},
		{study, `cell = "100 m"`, "cell = \"100 m\"\nstep = \"2 s\"", "study.toml:8:1: `cell` and `step` determine each other: give at most one of them\n  hint: keep the one that matters to you"},
		{study, `cell = "100 m"`, `report = "3 h"`, "study.toml:7:1: a result row of 10800 s is longer than the period of 7200 s"},
		{study, `cell = "100 m"`, `stretch_short_links = "yes"`, "study.toml:7:1: `stretch_short_links` must be true or false, found yes"},
		{study, `shape = "triangular"`, `shape = "triangle"`, "study.toml:9:1: unknown shape `triangle`: did you mean `triangular`?"},
		{study, `shape = "triangular"`, ``, "study.toml:8:10: a diagram needs a `shape`: "},
		{study, `jam_density = "120 veh/km/lane"`, ``, "study.toml:9:1: "},
		{study, `jam_density = "120 veh/km/lane"`, "jam_density = \"120 veh/km/lane\"\nwave_speed = \"90 km/h\"", "study.toml:9:1: "},
		{study, `capacity = "2000 veh/h/lane"`, `capacity = "2000 veh/h"`, "study.toml:11:1: `capacity`: `2000 veh/h` is no flow per lane: use veh/h/lane"},
		{study, `jam_density = "120 veh/km/lane"`, "jam_density = \"120 veh/km/lane\"\ndischarge_drop = \"100 %\"", "study.toml:13:1: a drop of 1 leaves nothing: it must be below 1"},
		{study, `links = ["E1", "E2"]`, `links = ["E1", "E9"]`, "study.toml:15:1: the network has no link `E9`\n  hint: did you mean `E1`?"},
		{study, `links = ["E1", "E2"]`, `links = ["E2", "E1"]`, "study.toml:15:1: corridor `A` breaks between `E2` and `E1`: the first ends at node `N3`, the second begins at node `N1`"},
		{study, `links = ["E1", "E2"]`, "links = [\"E1\", \"E2\"]\n[queue]\nwhen = \"slow\"", "study.toml:17:1: `slow` does not say what counts as queued: \"density\" (above critical), a speed such as \"50 km/h\", or a share of the free speed such as \"60 %\""},
		{study, `links = ["E1", "E2"]`, "links = [\"E1\", \"E2\"]\n[[outflow]]\nlink = \"E1\"\nflow = 100", "study.toml:17:1: link `E1` is no exit\n  hint: an exit is a link whose end node has no way out"},
		{study, `links = ["E1", "E2"]`, "links = [\"E1\", \"E2\"]\n[[junction]]\nnode = \"N2\"\npriority = { E2 = 1 }", "study.toml:18:14: link `E2` does not end at node `N2`\n  hint: there end `E1`"},
		{study, `links = ["E1", "E2"]`, "links = [\"E1\", \"E2\"]\n[[alternative]]\ntitle = \"x\"", "study.toml:16:3: an alternative needs a `name`\n  hint: add name = \"night\" or the like"},
		// The demand.
		{dem, `link = "E1"`, `link = "E11"`, "demand.toml:2:1: the network has no link `E11`\n  hint: did you mean `E1`?"},
		{dem, `link = "E1"`, ``, "demand.toml:1:3: `link` is missing: it names a link"},
		{dem, `flow = [900, 1200]`, `flow = [900]`, "demand.toml:5:1: `flow` covers 06:00 to 07:00, but the study runs from 06:00 to 08:00: it must cover the whole period"},
		{dem, `flow = [900, 1200]`, `flow = [900, -1]`, "demand.toml:5:14: value 2 of `flow` is -1: it must be a number of veh/h, 0 or more"},
		{dem, `flow = [900, 1200]`, `flow = [900, "many"]`, "demand.toml:5:14: value 2 of `flow` is many: it must be a number of veh/h, 0 or more"},
		{dem, `flow = [900, 1200]`, `flow = [900, nan]`, "demand.toml:5:14: value 2 of `flow` is NaN: it must be a number of veh/h, 0 or more"},
		{dem, `flow = [900, 1200]`, `flow = -5`, "demand.toml:5:1: a flow of -5 veh/h is negative"},
		{dem, `flow = [900, 1200]`, ``, "demand.toml:1:3: `flow` is missing: a number or a list of numbers, veh/h"},
		{dem, `every = "60 min"`, `every = "60"`, "demand.toml:4:1: `every`: `60` has no unit: use s, min or h"},
		{dem, `every = "60 min"`, `every = "0 min"`, "demand.toml:4:1: `every` must be a duration above 0, such as \"60 min\""},
		{dem, `flow = [900, 1200]`, "flow = [900, 1200]\nfactor = -2", "demand.toml:6:1: a factor of -2 is not possible: it must be 0 or more"},
		{dem, `flow = [900, 1200]`, "flow = [0, 1200]\nramp = true", "demand.toml:6:1: straight lines that keep each interval's total would fall below zero\n  hint: leave `ramp` out, or use shorter intervals"},
		{dem, `flow = [900, 1200]`, "flow = [900, 1200]\nmix = { car = 1 }", "demand.toml:6:9: there is no class `car`\n  hint: classes are `vehicle`"},
		{dem, `[[entry]]`, "[class.car]\n[class.truck]\npce = 2.0\n[[entry]]", "demand.toml:4:3: with several classes an entry needs a `mix`, such as { car = 0.9, truck = 0.1 }"},
		{dem, `[[entry]]`, "[class.truck]\npce = 0\n[[entry]]", "demand.toml:2:1: an equivalent of 0 is not possible: it must be above 0"},
		{dem, `to = { E2 = 0.9, X2 = 0.1 }`, `to = { E2 = 0.9, X2 = 0.2 }`, "demand.toml:9:1: the fractions sum to 1.1: they must sum to 1"},
		{dem, `to = { E2 = 0.9, X2 = 0.1 }`, `to = { E2 = 1.2, X2 = -0.2 }`, "demand.toml:9:8: a fraction of 1.2 is not possible: 0 to 1"},
		{dem, `to = { E2 = 0.9, X2 = 0.1 }`, `to = { E1 = 0.9, X2 = 0.1 }`, "demand.toml:9:8: link `E1` does not begin at the node\n  hint: there begin `E2`, `X2`"},
		{dem, `node = "N2"`, `node = "N9"`, "demand.toml:7:1: the network has no node `N9`\n  hint: did you mean `N2`?"},
		{dem, `from = "E1"`, `from = "X2"`, "demand.toml:8:1: link `X2` does not end at node `N2`\n  hint: there end `E1`"},
		{dem, `to = { E2 = 0.9, X2 = 0.1 }`, "to = { E2 = 0.9, X2 = 0.1 }\nclass = \"truck\"", "demand.toml:10:1: there is no class `truck`"},
		{dem, "[[turning]]\nnode = \"N2\"\nfrom = \"E1\"\nto = { E2 = 0.9, X2 = 0.1 }\n", "", "network.geojson:3: node `N2` has 2 ways out, but no turning fractions say where the traffic of link `E1` goes\n  hint: add [[turning]] with node = \"N2\", from = \"E1\""},
		{dem, listed, listed[:len(listed)-1] + "\n[[trips]]\nfrom = \"E1\"\n", "demand.toml:6:3: `trips` is not available in this version of tailback\n  hint: take it out to run the rest"},
		// Counts.
		{dem, listed, strings.Replace(counted, `column = "E1"`, `column = "E7"`, 1), "demand.toml:4:1: `DIR/counts.csv` has no column `E7`\n  hint: its columns are `E1`"},
		{dem, listed, strings.Replace(counted, `unit = "veh"`, `unit = "cars"`, 1), "demand.toml:5:1: `cars` is no unit of counts: \"veh\" (in each interval) or \"veh/h\""},
		{dem, listed, strings.Replace(counted, "counts.csv", "none.csv", 1), "demand.toml:3:1: cannot read `DIR/none.csv`: no such file or directory"},
		{counts, "time,E1", "hour,E1", "counts.csv:1:1: the first column is `hour`: it must be `time`, the start of each interval as HH:MM"},
		{counts, "07:00,1200", "07:00,12OO", "counts.csv:3:7: column `E1`: `12OO` is no count: a number, 0 or more"},
		{counts, "07:00,1200", "07:00,1200\n07:30,600", "counts.csv:4:1: column `time`: 07:30 follows 07:00, but the intervals before are 60 min long\n  hint: every interval needs its row"},
		{counts, "07:00,1200", "07:00,1200,3", "counts.csv:3: the row has 3 fields, the header 2"},
		{counts, "07:00,1200", "7h,1200", "counts.csv:3:1: column `time`: `7h` is no clock time: use HH:MM or HH:MM:SS, with hours past 24 for the following day"},
		// The network.
		{net, `{"type": "FeatureCollection"`, `{"type": "Topology"`, "network.geojson:1: the top of the file is of type `Topology`: it must be a FeatureCollection (RFC 7946)"},
		{net, `"lanes": 2, "from": "N1"`, `"lanes": 2 "from": "N1"`, "network.geojson:3: this is not GeoJSON: "},
		{net, `"lanes": 2, "from": "N1"`, `"lanes": 0, "from": "N1"`, "network.geojson:3: feature 2 (`E1`): `lanes` is 0: a link has more than 0"},
		{net, `"lanes": 2, "from": "N1"`, `"lanes": "two", "from": "N1"`, "network.geojson:3: feature 2 (`E1`): `lanes` must be a number, found two"},
		{net, `"lanes": 2, "from": "N1"`, `"from": "N1"`, "network.geojson:3: feature 2 (`E1`): a link needs the property `lanes`"},
		{net, `"id": "E2"`, `"id": "E1"`, "network.geojson:4: link `E1` stands twice (first as link 1)"},
		{net, `"id": "E1", "lanes": 2`, `"lanes": 2`, "network.geojson:3: feature 2: a link needs an `id`, as property or as the feature's own"},
		{net, `"id": "E1", "lanes": 2`, `"id": "E1", "lanes": 2, "length": -5`, "network.geojson:3: feature 2 (`E1`): `length`: "},
		{net, `"id": "E1", "lanes": 2`, `"id": "E1", "lanes": 2, "free_speed": "fast"`, "network.geojson:3: feature 2 (`E1`): `free_speed`: `fast` "},
		{net, `"id": "E1", "lanes": 2`, `"id": "E1", "lanes": 2, "diagram": "highway"`, "network.geojson:3: feature 2 (`E1`): `diagram` names `highway`, but the study has no [diagram.highway]"},
		{net, `"type": "LineString", "coordinates": [[-40.0, 12.00], [-40.0, 12.02]]`, `"type": "Polygon", "coordinates": [[[0, 0], [1, 0], [1, 1], [0, 0]]]`, "network.geojson:3: feature 2 (`E1`): its geometry is Polygon\n  hint: a link is a LineString, a node a Point"},
		{net, `[[-40.0, 12.00], [-40.0, 12.02]]`, `[[-40.0, 12.00]]`, "network.geojson:3: feature 2 (`E1`): a line needs at least 2 positions, this one has 1"},
		{net, `[[-40.0, 12.00], [-40.0, 12.02]]`, `[[-40.0, 112.00], [-40.0, 12.02]]`, "network.geojson:3: feature 2 (`E1`): position 1, [-40 112], is no longitude and latitude in degrees"},
		{net, `"from": "N2", "to": "N4"`, `"from": "N7", "to": "N4"`, "demand.toml:9:18: link `X2` does not begin at the node\n  hint: there begin `E2`"},
		{net, "]}\n", `, {"type": "Feature", "properties": {"id": "Z1", "lanes": 1}, "geometry": {"type": "LineString", "coordinates": [[-41.0, 12.02], [-41.01, 12.03]]}}` + "\n]}\n", "network.geojson:6: link `Z1` cannot be reached from any entry\n  hint: name an entry upstream of it in the demand, or take the link out"},
		{net, `"from": "N2", "to": "N3"`, `"from": "N2", "to": "N2"`, "network.geojson:4: "},
	} {
		path := write(t, c.file, c.old, c.text)
		if c.file == counts {
			with := strings.Replace(faultless[dem], listed, counted, 1)
			if err := os.WriteFile(filepath.Join(filepath.Dir(path), dem), []byte(with), 0o666); err != nil {
				t.Fatal(err)
			}
		}
		_, err := Read(path)
		if err == nil {
			t.Errorf("%q in place of %q: no error, want %s", c.text, c.old, c.want)
			continue
		}
		dir := filepath.Dir(path) + string(filepath.Separator)
		got := strings.ReplaceAll(err.Error(), dir, "")
		want := strings.ReplaceAll(c.want, "DIR/", "")
		if !strings.Contains("\n"+got, "\n"+want) {
			t.Errorf("%q in place of %q:\n got %s\nwant %s", c.text, c.old, got, want)
		}
	}
}

// All mistakes of all files are reported at once, sorted by file and line.
func TestAllMistakesAtOnce(t *testing.T) {
	path := write(t, "network.geojson", `"lanes": 1`, `"lanes": -1`)
	text := strings.Replace(faultless["study.toml"], `cell = "100 m"`, `cell = "1 kg"`, 1)
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	_, err := Read(path)
	list, ok := err.(Errors)
	if !ok || len(list) != 2 {
		t.Fatalf("got %v, want two errors", err)
	}
	if !strings.HasSuffix(list[0].File, "network.geojson") || list[0].Line != 5 || list[1].Line != 7 {
		t.Errorf("got %v", err)
	}
}
