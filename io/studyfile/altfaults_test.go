package studyfile

import (
	"fmt"
	"slices"
	"strings"
	"testing"
)

// marked takes the mark @ out of a text and returns its line and column, which count from 1.
func marked(text string) (plain string, line, column int) {
	before, after, _ := strings.Cut(text, "@")
	line = 1 + strings.Count(before, "\n")
	column = len(before) - strings.LastIndex(before, "\n")
	return before + after, line, column
}

// Every mistake in an alternative, with the whole message: what was found, what is possible (a hint), and the place, which
// the mark @ shows: the key, or the nearest table around a key that is missing.
func TestFaultsOfAlternatives(t *testing.T) {
	const night = ` start = "20:00", end = "29:00" `
	for _, c := range []struct{ text, want, hint string }{
		// Closures.
		{`lane_closure = [{ @links = ["E9"], lanes = 1 }]`, "the network has no link `E9`", "did you mean `E1`?"},
		{`lane_closure = [{ @links = [], lanes = 1 }]`, "`links` must name at least one link", ""},
		{`lane_closure = [{ @links = "E3", lanes = 1 }]`, "`links` must be a list of texts, such as [\"E1\", \"E2\"]", ""},
		{`lane_closure = [{ links = ["E3"], @lanes = 4 }]`, "4 lanes are to be closed, but link `E3` has 3", ""},
		{`lane_closure = [{ links = ["E3"], @lanes = 0 }]`, "`lanes` must say how many lanes are taken, more than 0", ""},
		{`lane_closure = [@{ links = ["E3"] }]`, "`lanes` must say how many lanes are taken, more than 0", ""},
		{`lane_closure = [{ links = ["E3"], @lanes = -1 }]`, "`lanes` must say how many lanes are taken, more than 0", ""},
		{`lane_closure = [{ links = ["E3"], @lanes = "one" }]`, "`lanes` must be a number, found one", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @from = "2.5 km" }]`, "the closure begins at 2.5 km, outside link `E3`, which is 2 km long", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @to = "2.5 km" }]`, "the closure ends at 2.5 km, outside link `E3`, which is 2 km long", ""},
		{`lane_closure = [{ links = ["E3", "E4"], lanes = 1, @to = "2.5 mi" }]`, "the closure ends at 4.023 km, outside the 4 km of its links", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, from = "900 m", @to = "800 m" }]`, "the closure ends at 800 m, not after its begin at 900 m", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, from = "900 m", @to = "900 m" }]`, "the closure ends at 900 m, not after its begin at 900 m", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @from = "-3 m" }]`, "`from`: `-3 m` is negative: it must be 0 or more", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @from = 300 }]`, "`from` needs a unit in quotes, such as \"300 m\"", ""},
		{`lane_closure = [{ @links = ["E3", "E5"], lanes = 1 }]`, "the closure breaks between `E3` and `E5`: the first ends at node `N3`, the second begins at node `N4`", "give the links from upstream to downstream, or one closure for each road"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, start = "29:00", @end = "20:00" }]`, "it ends at 20:00, not after its start at 29:00", "hours run past 24 for the following day: 05:00 of day 2 is \"29:00\""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @start = "8 pm" }]`, "`start`: `8 pm` is no clock time: use HH:MM or HH:MM:SS, with hours past 24 for the following day", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @capacity = "1500 veh/h" }]`, "`capacity`: `1500 veh/h` is no flow per lane: use veh/h/lane", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @capacity = "0 veh/h/lane" }]`, "`capacity` must be above 0", "to stop all traffic, take all lanes"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, capacity = "1400 veh/h/lane", @discharge = "1500 veh/h/lane" }]`, "1500 veh/h/lane out of the queue is more than the capacity of 1400 veh/h/lane", "a queue discharges at most what the lanes carried before it formed"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @colour = "red" }]`, "unknown key `colour`", "known here are `links`, `from`, `to`, `lanes`, `start`, `end`, `capacity`, `discharge`, `source`, `work_zone`, `speed_limit`"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @capacty = "red" }]`, "unknown key `capacty`", "did you mean `capacity`?"},
		{`@lane_closure = 3`, "`lane_closure` must be a list of tables", ""},
		// Work zones.
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { @barrier = "rubber" } }]`, "`barrier` is `rubber`: it must be `soft` or `hard`", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { @lateral_distance = "20 ft" } }]`, "a lateral distance of 6.096 m is outside the method: 0 to 12 ft (3.66 m)", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { @method = "guess" } }]`, "unknown method `guess`: it is `handbook` (the default) or `rule`", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 3, @work_zone = {} }]`, "all lanes of link `E3` are closed: a work zone's capacity needs an open lane", ""},
		{`lane_closure = [{ links = ["X2"], lanes = 0.5, work_zone = { method = "rule", @term = "long" } }]`, "the table of long-term works has no row for 1 lanes to 0.5: it has 2 to 1, 3 to 1, 3 to 2, 4 to 1, 4 to 2, 4 to 3", "use term = \"short\", or give capacity"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { @alpha = "100 %" } }]`, "a drop of 1 is not below 1", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { method = "rule", @intensity = 400 } }]`, "an intensity of 400 pc/h per lane is outside the rule: -160 to 160", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { coefficients = { @bias = 1 } } }]`, "unknown key `bias`", "did you mean `base`?"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @work_zone = { coefficients = { base = 100 } } }]`, "the method leaves no capacity", "check its inputs and coefficients, or give `capacity`"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, @work_zone = { coefficients = { speed_base = -200 } } }]`, "the method gives a free speed below 0", "check its speed limits and coefficients"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { coefficients = { @base = nan } } }]`, "`base` must be a finite number, found NaN", ""},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { @heavy_vehicles = "130 %" } }]`, "a share of 1.3 is above 1", ""},
		{`lane_closure = [{ links = ["E3"], @lanes = inf }]`, "`lanes` must be a finite number, found +Inf", ""},
		// Ramp closures.
		{`ramp_closure = [{ @link = "R9" }]`, "the network has no link `R9`", "did you mean `R2`?"},
		{`ramp_closure = [@{}]`, "`link` must name a link", ""},
		{`ramp_closure = [{ link = "R4", @divert = [{ to = "R2", share = 0.7 }, { to = "E1", share = 0.4 }] }]`, "the shares sum to 1.1: at most 1 can be diverted", "what the shares leave of 1 does not travel"},
		{`ramp_closure = [{ link = "R4", divert = [{ @to = "E2", share = 0.7 }] }]`, "no traffic begins on link `E2`", "entries are `E1`, `R2`, `R4`"},
		{`ramp_closure = [{ link = "R4", divert = [{ @to = "R2", share = 0.7 }] }, { link = "R2", start = "21:00", end = "22:00" }]`, "link `R2` is closed too, from 21:00 to 22:00", "name one that stays open"},
		{`ramp_closure = [{ link = "R4", divert = [{ @to = "R4", share = 0.7 }] }]`, "link `R4` cannot take its own traffic while it is closed", ""},
		{`ramp_closure = [{ link = "R4", divert = [@{ to = "R2" }] }]`, "`divert` needs a `share` for each `to`", ""},
		{`ramp_closure = [{ link = "R4" }, { @link = "R4" }]`, "link `R4` is closed twice at once", "give one closure for each link and time"},
		{`ramp_closure = [{ link = "X3", @divert = [{ to = "X2", share = 1 }] }]`, "no way from entry `R2` to `X2` while `X3` is closed: possible are `E5`", "traffic that arrives by road can only leave at exits that it can reach"},
		// Incidents, limits, meters.
		{`incident = [{ link = "E3", at = "400 m", @capacity_left = 1.2,` + night + `}]`, "a share of 1.2 of the capacity cannot be left: 0 to 1 can", ""},
		{`incident = [{ link = "E3", at = "400 m", @capacity_left = -0.2,` + night + `}]`, "`capacity_left`: `-0.2` is negative: it must be 0 or more", ""},
		{`incident = [@{ link = "E3", at = "400 m",` + night + `}]`, "an incident needs `capacity_left`, the share of the capacity that remains (0 to 1)", ""},
		{`incident = [{ link = "E3", @at = "2 km", capacity_left = 0.5,` + night + `}]`, "2 km lies outside link `E3`, which is 2 km long", ""},
		{`speed_limit = [{ links = ["E3"], @limit = "80 km" }]`, "`limit`: `80 km` is no speed: use km/h, mph or m/s", ""},
		{`speed_limit = [@{ links = ["E3"] }]`, "`limit` must be a speed above 0, such as \"80 km/h\"", ""},
		{`meter = [@{ link = "R2" }]`, "a meter needs a `rate`, such as \"900 veh/h\"", ""},
		{`meter = [{ link = "R2", rate = "9 veh/min" }, { @link = "R2", rate = "500 veh/h", start = "20:00" }]`, "link `R2` has two meters at once, from 20:00", "end one before the other begins"},
		// Demand and diagrams.
		{`demand_change = [{ @entries = ["E2"], factor = 0.9 }]`, "no traffic begins on link `E2`", "entries are `E1`, `R2`, `R4`"},
		{`demand_change = [@{ entries = ["E1"] }]`, "a demand change needs a `factor`, such as 0.9", ""},
		{`demand_change = [{ @factor = -1 }]`, "a factor of -1 is no use: it must be 0 or more", ""},
		{`diagram_change = [{ @diagram = "motorway", shape = "greenshields" }]`, "the study has no [diagram.motorway]", "the study has `default`, `freeway`, `ramp`"},
		{`diagram_change = [@{ shape = "greenshields" }]`, "`diagram` must name a diagram of the study", ""},
		{`diagram_change = [{ diagram = "freeway", @shape = "square" }]`, "link `E1`: unknown shape `square`: did you mean `drake`? the shapes are triangular, trapezoidal, greenshields, greenberg, underwood, drake, pipes-munjal, newell-franklin, smulders, quadratic-linear, inverse-lambda, del-castillo, van-aerde, piecewise", ""},
		{`diagram_change = [{ diagram = "freeway", @discharge_drop = 1 }]`, "a drop of 1 leaves nothing: it must be below 1", ""},
		{`@closure = [{}]`, "unknown key `closure`", "known here are `name`, `title`, `lane_closure`, `ramp_closure`, `incident`, `speed_limit`, `demand_change`, `meter`, `diagram_change`"},
	} {
		text, line, column := marked("[[alternative]]\nname = \"a\"\n" + c.text)
		want := fmt.Sprintf("study.toml:%d:%d: %s", line, column, c.want)
		if c.hint != "" {
			want += "\n  hint: " + c.hint
		}
		if _, faulty, _ := readAlternatives(t, corridor(t), text); len(faulty) != 1 || faulty[0] != want {
			t.Errorf("%s\ngot  %s\nwant %s", c.text, strings.Join(faulty, "\n     "), want)
		}
	}
}

func TestFaultsOfNames(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"[[alternative]]\n", "study.toml:1:3: an alternative needs a `name`\n  hint: add name = \"night\" or the like"},
		{"[[alternative]]\nname = \"base\"", "study.toml:2:1: the name `base` is taken: every alternative needs its own, and `base` is the study without any"},
		{"[[alternative]]\nname = \"a\"\n[[alternative]]\nname = \"a\"", "study.toml:4:1: the name `a` is taken: every alternative needs its own, and `base` is the study without any"},
		{"[[alternative]]\nname = \"../a\"", "study.toml:2:1: `../a` cannot name a folder of results\n  hint: use letters, digits, `-` and `_`"},
	} {
		if _, faulty, _ := readAlternatives(t, corridor(t), c.text); len(faulty) != 1 || faulty[0] != c.want {
			t.Errorf("got %q, want %q", faulty, c.want)
		}
	}
}

// Several mistakes in a study written out with headers are reported together, each at its own line.
func TestFaultsInOrder(t *testing.T) {
	_, faulty, _ := readAlternatives(t, corridor(t), `title = "t"

[[alternative]]
name = "a"

[[alternative.lane_closure]]
links = ["E3"]
lanes = 5

[[alternative.lane_closure]]
links = ["E4"]
lanes = 1
work_zone = { barrier = "soft", light = "dusk" }

[[alternative]]
name = "b"

[[alternative.ramp_closure]]
link = "R4"
divert = [
  { to = "R2", share = 0.5 },
  { to = "R8", share = 0.1 },
]
`)
	want := []string{
		"study.toml:8:1: 5 lanes are to be closed, but link `E3` has 3",
		"study.toml:13:33: `light` is `dusk`: it must be `day` or `night`",
		"study.toml:22:5: the network has no link `R8`\n  hint: did you mean `R2`?",
	}
	if !slices.Equal(faulty, want) {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(faulty, "\n"), strings.Join(want, "\n"))
	}
}

// A closure outside the study's period is no fault, but a warning.
func TestWarningsOfAlternatives(t *testing.T) {
	_, faulty, warnings := readAlternatives(t, corridor(t), "[[alternative]]\nname = \"a\"\nlane_closure = [{ links = [\"E3\"], lanes = 1, start = \"31:00\", end = \"32:00\" }]")
	want := "study.toml:3: it lasts from 31:00 to 32:00, outside the study's period from 18:00 to 30:00: it changes nothing"
	if len(faulty) != 0 || len(warnings) != 1 || warnings[0] != want {
		t.Errorf("faults %q, warnings %q, want %q", faulty, warnings, want)
	}
}
