package main

import (
	"strings"
	"testing"

	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

func TestHang(t *testing.T) {
	got := block("label", strings.Repeat("word ", 20)+"veh·h veh·h")
	want := "label        word word word word word word word word word word word word word\n" +
		"             word word word word word word word veh·h veh·h\n"
	if got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	if got := block("label", ""); got != "label\n" {
		t.Errorf("empty text: %q", got)
	}
	long := strings.Repeat("x", 100)
	if got := hang("- ", long+" y"); got != "- "+long+"\n  y\n" {
		t.Errorf("a word wider than the screen: %q", got)
	}
}

func TestNumbersForPeople(t *testing.T) {
	for _, c := range []struct{ got, want string }{
		{whole(0), "0"},
		{whole(-0.2), "0"},
		{whole(999.5), "1,000"},
		{whole(1234567), "1,234,567"},
		{whole(-1234), "-1,234"},
		{few(0.04), "0.0"},
		{few(9.94), "9.9"},
		{few(9.96), "10"},
		{few(739.15), "739"},
		{hours(36 * 3600), "36 veh·h"},
		{plural(1, "cell"), "1 cell"},
		{plural(0, "cell"), "0 cells"},
		{plural(2, "entry"), "2 entries"},
		{plural(12345, "step"), "12,345 steps"},
		{minute(7*3600 + 9*60 + 29), "07:09"},
		{minute(7*3600 + 9*60 + 31), "07:10"},
		{minute(29 * 3600), "29:00"},
		{distance(1609344, unit.US), "1,000 veh·mi"},
		{distance(1609344, unit.Metric), "1,609 veh·km"},
	} {
		if c.got != c.want {
			t.Errorf("got %q, want %q", c.got, c.want)
		}
	}
}

// A corridor of one link that falls from MP 10 in the direction of travel, and a link beside it.
func TestPlaces(t *testing.T) {
	n := &network.Network{
		Nodes: []network.Node{{Name: "N1", Title: "Mill Lane"}, {Name: "N2"}},
		Links: []network.Link{{Name: "A", From: 0, To: 1, Length: 2 * unit.Mile}, {Name: "R", From: 1, To: 0, Length: 400}},
	}
	a := axis{network: n, units: unit.US, corridors: []network.Corridor{
		{Name: "down", Links: []network.LinkID{0}, StartAt: 10 * unit.Mile, Descending: true, Chained: true},
	}}
	metric := a
	metric.units = unit.Metric
	bare := axis{network: n, units: unit.Metric}
	for _, c := range []struct{ got, want string }{
		{a.place(0, unit.Mile), "A (MP 9.0)"},
		{metric.place(0, unit.Mile), "A (km 14.5)"}, // 9 mi = 14.484 km
		{bare.place(0, 250), "A (250 m from its start)"},
		{bare.place(1, 400), "R (its end)"},
		{a.node(0, 0), "Mill Lane (MP 10.0)"},
		{a.node(1, 1), "N2"},
	} {
		if c.got != c.want {
			t.Errorf("got %q, want %q", c.got, c.want)
		}
	}
}
