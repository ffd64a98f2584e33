package studyfile

import (
	"strings"
	"testing"
)

// Every mistake in an alternative, with the whole message: path of the key, what was found, what is possible.
func TestFaultsOfAlternatives(t *testing.T) {
	const night = ` start = "20:00", end = "29:00" `
	for _, c := range []struct{ text, want string }{
		// Closures.
		{`lane_closure = [{ links = ["E9"], lanes = 1 }]`, "alternative[0].lane_closure[0].links: the network has no link `E9` (did you mean `E1`?)"},
		{`lane_closure = [{ links = [], lanes = 1 }]`, "alternative[0].lane_closure[0].links: `links` must name at least one link"},
		{`lane_closure = [{ links = "E3", lanes = 1 }]`, "alternative[0].lane_closure[0].links: `links` must be a list of texts, such as [\"E1\", \"E2\"]"},
		{`lane_closure = [{ links = ["E3"], lanes = 4 }]`, "alternative[0].lane_closure[0].lanes: 4 lanes are to be closed, but link `E3` has 3"},
		{`lane_closure = [{ links = ["E3"], lanes = 0 }]`, "alternative[0].lane_closure[0].lanes: `lanes` must say how many lanes are taken, more than 0"},
		{`lane_closure = [{ links = ["E3"] }]`, "alternative[0].lane_closure[0].lanes: `lanes` must say how many lanes are taken, more than 0"},
		{`lane_closure = [{ links = ["E3"], lanes = -1 }]`, "alternative[0].lane_closure[0].lanes: `lanes` must say how many lanes are taken, more than 0"},
		{`lane_closure = [{ links = ["E3"], lanes = "one" }]`, "alternative[0].lane_closure[0].lanes: `lanes` must be a number, found one"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, from = "2.5 km" }]`, "alternative[0].lane_closure[0].from: the closure begins at 2.5 km, outside link `E3`, which is 2 km long"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, to = "2.5 km" }]`, "alternative[0].lane_closure[0].to: the closure ends at 2.5 km, outside link `E3`, which is 2 km long"},
		{`lane_closure = [{ links = ["E3", "E4"], lanes = 1, to = "2.5 mi" }]`, "alternative[0].lane_closure[0].to: the closure ends at 4.023 km, outside the 4 km of its links"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, from = "900 m", to = "800 m" }]`, "alternative[0].lane_closure[0].to: the closure ends at 800 m, not after its begin at 900 m"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, from = "900 m", to = "900 m" }]`, "alternative[0].lane_closure[0].to: the closure ends at 900 m, not after its begin at 900 m"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, from = "-3 m" }]`, "alternative[0].lane_closure[0].from: `from`: `-3 m` is negative: it must be 0 or more"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, from = 300 }]`, "alternative[0].lane_closure[0].from: `from` needs a unit in quotes, such as \"300 m\""},
		{`lane_closure = [{ links = ["E3", "E5"], lanes = 1 }]`, "alternative[0].lane_closure[0].links: the closure breaks between `E3` and `E5`: the first ends at node `N3`, the second begins at node `N4` (give the links from upstream to downstream, or one closure for each road)"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, start = "29:00", end = "20:00" }]`, "alternative[0].lane_closure[0].end: it ends at 20:00, not after its start at 29:00 (hours run past 24 for the following day: 05:00 of day 2 is \"29:00\")"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, start = "8 pm" }]`, "alternative[0].lane_closure[0].start: `start`: `8 pm` is no clock time: use HH:MM or HH:MM:SS, with hours past 24 for the following day"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, capacity = "1500 veh/h" }]`, "alternative[0].lane_closure[0].capacity: `capacity`: `1500 veh/h` is no flow per lane: use veh/h/lane"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, capacity = "0 veh/h/lane" }]`, "alternative[0].lane_closure[0].capacity: `capacity` must be above 0 (to stop all traffic, take all lanes)"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, capacity = "1400 veh/h/lane", discharge = "1500 veh/h/lane" }]`, "alternative[0].lane_closure[0].discharge: 1500 veh/h/lane out of the queue is more than the capacity of 1400 veh/h/lane (a queue discharges at most what the lanes carried before it formed)"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, colour = "red" }]`, "alternative[0].lane_closure[0].colour: unknown key `colour` (known here are `links`, `from`, `to`, `lanes`, `start`, `end`, `capacity`, `discharge`, `source`, `work_zone`, `speed_limit`)"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, capacty = "red" }]`, "alternative[0].lane_closure[0].capacty: unknown key `capacty` (did you mean `capacity`?)"},
		{`lane_closure = 3`, "alternative[0].lane_closure: `lane_closure` must be a list of tables"},
		// Work zones.
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { barrier = "rubber" } }]`, "alternative[0].lane_closure[0].work_zone.barrier: `barrier` is `rubber`: it must be `soft` or `hard`"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { lateral_distance = "20 ft" } }]`, "alternative[0].lane_closure[0].work_zone.lateral_distance: a lateral distance of 6.096 m is outside the method: 0 to 12 ft (3.66 m)"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { method = "guess" } }]`, "alternative[0].lane_closure[0].work_zone.method: unknown method `guess`: it is `handbook` (the default) or `rule`"},
		{`lane_closure = [{ links = ["E3"], lanes = 3, work_zone = {} }]`, "alternative[0].lane_closure[0].work_zone: all lanes of link `E3` are closed: a work zone's capacity needs an open lane"},
		{`lane_closure = [{ links = ["X2"], lanes = 0.5, work_zone = { method = "rule", term = "long" } }]`, "alternative[0].lane_closure[0].work_zone.term: the table of long-term works has no row for 1 lanes to 0.5: it has 2 to 1, 3 to 1, 3 to 2, 4 to 1, 4 to 2, 4 to 3 (use term = \"short\", or give capacity)"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { alpha = "100 %" } }]`, "alternative[0].lane_closure[0].work_zone.alpha: a drop of 1 is not below 1"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { method = "rule", intensity = 400 } }]`, "alternative[0].lane_closure[0].work_zone.intensity: an intensity of 400 pc/h per lane is outside the rule: -160 to 160"},
		{`lane_closure = [{ links = ["E3"], lanes = 1, work_zone = { coefficients = { bias = 1 } } }]`, "alternative[0].lane_closure[0].work_zone.coefficients.bias: unknown key `bias` (did you mean `base`?)"},
		// Ramp closures.
		{`ramp_closure = [{ link = "R9" }]`, "alternative[0].ramp_closure[0].link: the network has no link `R9` (did you mean `R2`?)"},
		{`ramp_closure = [{}]`, "alternative[0].ramp_closure[0].link: `link` must name a link"},
		{`ramp_closure = [{ link = "R4", divert = [{ to = "R2", share = 0.7 }, { to = "E1", share = 0.4 }] }]`, "alternative[0].ramp_closure[0].divert: the shares sum to 1.1: at most 1 can be diverted (what the shares leave of 1 does not travel)"},
		{`ramp_closure = [{ link = "R4", divert = [{ to = "E2", share = 0.7 }] }]`, "alternative[0].ramp_closure[0].divert[0].to: no traffic begins on link `E2` (entries are `E1`, `R2`, `R4`)"},
		{`ramp_closure = [{ link = "R4", divert = [{ to = "R2", share = 0.7 }] }, { link = "R2", start = "21:00", end = "22:00" }]`, "alternative[0].ramp_closure[0].divert[0].to: link `R2` is closed too, from 21:00 to 22:00 (name one that stays open)"},
		{`ramp_closure = [{ link = "R4", divert = [{ to = "R4", share = 0.7 }] }]`, "alternative[0].ramp_closure[0].divert[0].to: link `R4` cannot take its own traffic while it is closed"},
		{`ramp_closure = [{ link = "R4", divert = [{ to = "R2" }] }]`, "alternative[0].ramp_closure[0].divert[0]: `divert` needs a `share` for each `to`"},
		{`ramp_closure = [{ link = "R4" }, { link = "R4" }]`, "alternative[0].ramp_closure[1].link: link `R4` is closed twice at once (give one closure for each link and time)"},
		{`ramp_closure = [{ link = "X3", divert = [{ to = "X2", share = 1 }] }]`, "alternative[0].ramp_closure[0].divert: no way from entry `R2` to `X2` while `X3` is closed: possible are `E5` (traffic that arrives by road can only leave at exits that it can reach)"},
		// Incidents, limits, meters.
		{`incident = [{ link = "E3", at = "400 m", capacity_left = 1.2,` + night + `}]`, "alternative[0].incident[0].capacity_left: a share of 1.2 of the capacity cannot be left: 0 to 1 can"},
		{`incident = [{ link = "E3", at = "400 m", capacity_left = -0.2,` + night + `}]`, "alternative[0].incident[0].capacity_left: `capacity_left`: `-0.2` is negative: it must be 0 or more"},
		{`incident = [{ link = "E3", at = "400 m",` + night + `}]`, "alternative[0].incident[0]: an incident needs `capacity_left`, the share of the capacity that remains (0 to 1)"},
		{`incident = [{ link = "E3", at = "2 km", capacity_left = 0.5,` + night + `}]`, "alternative[0].incident[0].at: 2 km lies outside link `E3`, which is 2 km long"},
		{`speed_limit = [{ links = ["E3"], limit = "80 km" }]`, "alternative[0].speed_limit[0].limit: `limit`: `80 km` is no speed: use km/h, mph or m/s"},
		{`speed_limit = [{ links = ["E3"] }]`, "alternative[0].speed_limit[0].limit: `limit` must be a speed above 0, such as \"80 km/h\""},
		{`meter = [{ link = "R2" }]`, "alternative[0].meter[0]: a meter needs a `rate`, such as \"900 veh/h\""},
		{`meter = [{ link = "R2", rate = "9 veh/min" }, { link = "R2", rate = "500 veh/h", start = "20:00" }]`, "alternative[0].meter[1].link: link `R2` has two meters at once, from 20:00 (end one before the other begins)"},
		// Demand and diagrams.
		{`demand_change = [{ entries = ["E2"], factor = 0.9 }]`, "alternative[0].demand_change[0].entries: no traffic begins on link `E2` (entries are `E1`, `R2`, `R4`)"},
		{`demand_change = [{ entries = ["E1"] }]`, "alternative[0].demand_change[0]: a demand change needs a `factor`, such as 0.9"},
		{`demand_change = [{ factor = -1 }]`, "alternative[0].demand_change[0].factor: a factor of -1 is no use: it must be 0 or more"},
		{`diagram_change = [{ diagram = "motorway", shape = "greenshields" }]`, "alternative[0].diagram_change[0].diagram: the study has no [diagram.motorway] (the study has `default`, `freeway`, `ramp`)"},
		{`diagram_change = [{ shape = "greenshields" }]`, "alternative[0].diagram_change[0].diagram: `diagram` must name a diagram of the study"},
		{`diagram_change = [{ diagram = "freeway", shape = "square" }]`, "alternative[0].diagram_change[0].shape: link `E1`: unknown shape `square`"},
		{`closure = [{}]`, "alternative[0].closure: unknown key `closure` (known here are `name`, `title`, `lane_closure`, `ramp_closure`, `incident`, `speed_limit`, `demand_change`, `meter`, `diagram_change`)"},
	} {
		_, faults, _ := read(t, corridor(t), "[[alternative]]\nname = \"a\"\n"+c.text)
		found := false
		for _, f := range faults {
			found = found || f == c.want || strings.HasPrefix(f, c.want) && strings.Contains(c.want, "unknown")
		}
		if !found || len(faults) > 1 && !strings.Contains(c.text, "square") {
			t.Errorf("%s\n got %s\nwant %s", c.text, strings.Join(faults, "\n     "), c.want)
		}
	}
}

func TestFaultsOfNames(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"[[alternative]]\n", "alternative[0]: an alternative needs a `name` (add name = \"night\" or the like)"},
		{"[[alternative]]\nname = \"base\"", "alternative[0].name: the name `base` is taken: every alternative needs its own, and `base` is the study without any"},
		{"[[alternative]]\nname = \"a\"\n[[alternative]]\nname = \"a\"", "alternative[1].name: the name `a` is taken: every alternative needs its own, and `base` is the study without any"},
		{"[[alternative]]\nname = \"../a\"", "alternative[0].name: `../a` cannot name a folder of results (use letters, digits, `-` and `_`)"},
	} {
		if _, faults, _ := read(t, corridor(t), c.text); len(faults) != 1 || faults[0] != c.want {
			t.Errorf("got %q, want %q", faults, c.want)
		}
	}
}

// A closure outside the study's period is no fault, but a warning.
func TestWarningsOfAlternatives(t *testing.T) {
	_, faults, warnings := read(t, corridor(t), "[[alternative]]\nname = \"a\"\nlane_closure = [{ links = [\"E3\"], lanes = 1, start = \"31:00\", end = \"32:00\" }]")
	want := "alternative[0].lane_closure[0].start: it lasts from 31:00 to 32:00, outside the study's period from 18:00 to 30:00: it changes nothing"
	if len(faults) != 0 || len(warnings) != 1 || warnings[0] != want {
		t.Errorf("faults %q, warnings %q, want %q", faults, warnings, want)
	}
}
