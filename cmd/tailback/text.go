package main

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// columns is the width of the screen's lines.
const columns = 80

// block writes text behind a label, wrapped, its further lines indented like its first.
func block(label, text string) string {
	return hang(fmt.Sprintf("%-12s ", label), text)
}

// hang writes text behind a lead, wrapped at the screen's width; further lines are indented by the lead's width.
func hang(lead, text string) string {
	indent := utf8.RuneCountInString(lead)
	var b strings.Builder
	b.WriteString(lead)
	used := indent
	for i, word := range strings.Fields(text) {
		width := utf8.RuneCountInString(word)
		switch {
		case i == 0:
		case used+1+width > columns:
			b.WriteString("\n" + strings.Repeat(" ", indent))
			used = indent
		default:
			b.WriteByte(' ')
			used++
		}
		b.WriteString(word)
		used += width
	}
	return strings.TrimRight(b.String(), " ") + "\n"
}

// whole writes a number without decimals and with a comma between thousands.
func whole(x float64) string {
	text := strconv.FormatFloat(math.Abs(math.Round(x)), 'f', 0, 64)
	for i := len(text) - 3; i > 0; i -= 3 {
		text = text[:i] + "," + text[i:]
	}
	if math.Round(x) < 0 {
		return "-" + text
	}
	return text
}

// few writes a number to about three digits: one decimal below 10, none above.
func few(x float64) string {
	if math.Abs(x) < 9.95 {
		return strconv.FormatFloat(math.Round(x*10)/10+0, 'f', 1, 64)
	}
	return whole(x)
}

// hours writes seconds as vehicle-hours.
func hours(vehSeconds float64) string { return few(vehSeconds/unit.Hour) + " veh·h" }

// plural writes a count with its noun.
func plural(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	if stem, y := strings.CutSuffix(noun, "y"); y {
		noun = stem + "ie"
	}
	return whole(float64(n)) + " " + noun + "s"
}

// minute writes a time of day as HH:MM, to the nearest minute.
func minute(seconds float64) string {
	return strings.TrimSuffix(unit.Clock(math.Round(seconds/60)*60), ":00")
}

// distance writes vehicle-metres in the unit that a system travels in.
func distance(vehMetres float64, units unit.System) string {
	if units == unit.US {
		return whole(vehMetres/unit.Mile) + " veh·mi"
	}
	return whole(vehMetres/unit.Kilometre) + " veh·km"
}

// axis names points of the road so that a person can find them.
type axis struct {
	network   *network.Network
	corridors []network.Corridor
	units     unit.System
}

// chainage writes the place of a point on the first corridor with a chainage that holds its link, as "MP 6.7" or
// "km 10.8"; else "".
func (a axis) chainage(link network.LinkID, at float64) string {
	for i := range a.corridors {
		c := &a.corridors[i]
		x, on := c.Place(a.network, link, at)
		switch {
		case !on || !c.Chained:
		case a.units == unit.US:
			return fmt.Sprintf("MP %.1f", x/unit.Mile+0)
		default:
			return fmt.Sprintf("km %.1f", x/unit.Kilometre+0)
		}
	}
	return ""
}

// place names a point of a link: "M8 (MP 6.9)" or, off any chainage, "R5 (120 m from its start)".
func (a axis) place(link network.LinkID, at float64) string {
	l := &a.network.Links[link]
	if where := a.chainage(link, at); where != "" {
		return fmt.Sprintf("%s (%s)", l.Name, where)
	}
	if at >= l.Length-1 {
		return l.Name + " (its end)"
	}
	return fmt.Sprintf("%s (%s from its start)", l.Name, a.units.Length(at))
}

// node names a node at the upstream end of a link.
func (a axis) node(id network.NodeID, link network.LinkID) string {
	n := &a.network.Nodes[id]
	title := n.Title
	if title == "" {
		title = n.Name
	}
	where := a.chainage(link, 0)
	if where == "" || strings.Contains(title, where) {
		return title
	}
	return fmt.Sprintf("%s (%s)", title, where)
}
