package measure

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// metres prints a length: whole metres below a kilometre, else kilometres to the metre.
func metres(x float64) string {
	if math.Abs(x) < 999.5 {
		return strconv.FormatFloat(math.Round(x), 'f', -1, 64) + " m"
	}
	return strconv.FormatFloat(math.Round(x)/1000, 'f', -1, 64) + " km"
}

// length prints a length in either system: as metres does, or feet below a quarter of a mile and miles to two decimals.
func length(x float64, sys unit.System) string {
	if sys == unit.Metric {
		return metres(x)
	}
	if math.Abs(x) < unit.Mile/4 {
		return grouped(x/unit.Foot) + " ft"
	}
	return strconv.FormatFloat(math.Round(x/unit.Mile*100)/100, 'f', -1, 64) + " mi"
}

// clock prints s after midnight as HH:MM or HH:MM:SS, running past 24.
func clock(t float64) string {
	s := int(math.Round(t))
	sign := ""
	if s < 0 {
		sign, s = "-", -s
	}
	if s%60 == 0 {
		return fmt.Sprintf("%s%02d:%02d", sign, s/3600, s/60%60)
	}
	return fmt.Sprintf("%s%02d:%02d:%02d", sign, s/3600, s/60%60, s%60)
}

// period prints a window of time.
func period(start, end float64) string { return clock(start) + "-" + clock(end) }

// hourly prints a flow in whole vehicles per hour with a comma between thousands.
func hourly(flow float64) string { return grouped(flow*3600) + " veh/h" }

// grouped prints a whole number with commas between thousands.
func grouped(x float64) string {
	digits := strconv.FormatFloat(math.Abs(math.Round(x)), 'f', 0, 64)
	for i := len(digits) - 3; i > 0; i -= 3 {
		digits = digits[:i] + "," + digits[i:]
	}
	if math.Round(x) < 0 {
		return "-" + digits
	}
	return digits
}

// speed prints a speed.
func speed(v float64, sys unit.System) string {
	if sys == unit.US {
		return number(v/unit.MilePerHour) + " mph"
	}
	return number(v/unit.KilometrePerHour) + " km/h"
}

// bothSpeeds prints a speed in both systems, where a method's own units are not the study's.
func bothSpeeds(v float64) string { return speed(v, unit.Metric) + " (" + speed(v, unit.US) + ")" }

// number prints up to four significant digits.
func number(x float64) string {
	return strconv.FormatFloat(round(x, 4), 'f', -1, 64)
}

func round(x float64, digits int) float64 {
	y, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'g', digits, 64), 64)
	return y
}

// percent prints a share.
func percent(x float64) string { return number(x*100) + " %" }

// names lists the names of links.
func names(n *network.Network, links []network.LinkID) string {
	list := make([]string, len(links))
	for i, l := range links {
		list[i] = "`" + n.Links[l].Name + "`"
	}
	noun := "link "
	if len(list) > 1 {
		noun = "links "
	}
	return noun + strings.Join(list, ", ")
}

// place describes consecutive spans: where the first begins and the last ends.
func place(n *network.Network, spans []Span, sys unit.System) string {
	first, last := &spans[0], &spans[len(spans)-1]
	end := &n.Links[last.Link]
	to := min(last.To, end.Length)
	if len(spans) == 1 {
		if first.From <= 0 && to >= end.Length {
			return fmt.Sprintf("the whole of link `%s`", end.Name)
		}
		return fmt.Sprintf("from %s to %s of link `%s`", length(first.From, sys), length(to, sys), end.Name)
	}
	begin := &n.Links[first.Link]
	return fmt.Sprintf("from %s of link `%s` to %s of link `%s`", length(first.From, sys), begin.Name, length(to, sys), end.Name)
}
