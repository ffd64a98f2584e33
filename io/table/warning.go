package table

import (
	"fmt"
	"math"
	"strings"

	"example.org/tailback/ctm/study"
	"example.org/tailback/network/unit"
)

// WarningCaution stands beside every table of tails.
const WarningCaution = "An estimate for planning. It sets no sign and permits no closure: the road authority's manual and the responsible licensed engineer decide."

// writeWarning writes warning.csv for a run with measures: the farthest tail in each quarter of an hour along each
// corridor. Places are rounded upstream, distances and speeds up, and distances to exits down. Where the queue left the
// map the fields of its tail are empty and `basis` says so.
func writeWarning(dir string, r *study.Result) error {
	if len(r.Scenario.Measures) == 0 {
		return nil
	}
	s, err := newSheet(dir, "warning.csv", "time,until,corridor,tail_chainage_m,tail_milepost,tail_link,tail_at_m,upstream_of_closure_m,growth_km_per_h,approach_km_per_h,exit_1,exit_1_before_tail_m,exit_2,exit_2_before_tail_m,joining_roads,basis")
	if err != nil {
		return err
	}
	for _, row := range study.Tails(r) {
		chain := &r.Corridors.Chains[row.Corridor]
		s.clock(row.Start)
		s.clock(row.End)
		s.text(chain.Name)
		s.tail(r, &row)
		for i := range 2 {
			if row.OffMap || i >= len(row.Exits) {
				s.text("")
				s.text("")
				continue
			}
			s.text(linkName(r, row.Exits[i].Link))
			s.number(math.Floor(row.Exits[i].Distance), 0)
		}
		var names []string
		for _, l := range row.Joining {
			names = append(names, linkName(r, l))
		}
		s.text(strings.Join(names, " "))
		s.text(basis(r, &row))
		s.end()
	}
	return s.close()
}

// tail writes the place of a tail, rounded upstream, and its speeds, rounded up.
func (s *sheet) tail(r *study.Result, row *study.TailRow) {
	if row.OffMap {
		for range 7 {
			s.text("")
		}
		return
	}
	chain := &r.Corridors.Chains[row.Corridor]
	s.number(RoundUpstream(chain.StartAt, row.X, 1, chain.Descending), 0)
	s.number(RoundUpstream(chain.StartAt, row.X, unit.Mile/100, chain.Descending)/unit.Mile, 2)
	s.text(linkName(r, row.Tail.Link))
	s.number(math.Floor(row.Tail.At), 0)
	s.number(math.Ceil(row.Upstream), 0)
	s.number(math.Ceil(row.Growth*kmh*10)/10, 1)
	s.number(math.Ceil(row.Approach*kmh*10)/10, 1)
}

// RoundUpstream is the chainage of x metres along a corridor that begins at a chainage, to a multiple of a length in
// metres, never downstream of the place.
func RoundUpstream(startAt, x, to float64, descending bool) float64 {
	const slack = 1e-6 // a place on a multiple stays there despite round-off
	if descending {
		return math.Ceil((startAt-x)/to-slack) * to
	}
	return math.Floor((startAt+x)/to+slack) * to
}

// basis says in words where a row comes from.
func basis(r *study.Result, row *study.TailRow) string {
	chain := &r.Corridors.Chains[row.Corridor]
	if row.OffMap {
		return fmt.Sprintf("the queue left the map at the first point of the corridor (link %s) at %s: how far it reaches is not known", linkName(r, chain.Links[0]), unit.Clock(row.Seen))
	}
	text := fmt.Sprintf("farthest of the tails computed every %.3g min, seen at %s, on cells of up to %.0f m; queued is %s; rounded upstream", float64(r.Grid.PerReport)*r.Grid.Step/60, unit.Clock(row.Seen), longestCell(r), r.Criterion)
	if row.Spread {
		text += fmt.Sprintf("; the longest branch leaves the corridor, so link %s counts as queued to its start", linkName(r, row.Tail.Link))
	}
	if math.IsNaN(row.Upstream) {
		text += "; no closure on this corridor"
	} else {
		text += "; distance from the closure's upstream end along the corridor"
	}
	if !chain.Chained {
		text += "; chainage counted from the corridor's first point"
	}
	return text
}

// longestCell is the length of the longest cell, m.
func longestCell(r *study.Result) float64 {
	longest := 0.0
	for i := range r.Grid.Segments {
		longest = max(longest, r.Grid.Segments[i].Dx)
	}
	return longest
}
