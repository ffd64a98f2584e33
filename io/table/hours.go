package table

import (
	"strings"

	"example.org/tailback/ctm/study"
	"example.org/tailback/network"
)

// Day is one day's permitted hours: the windows by start and duration, and the day's network.
type Day struct {
	Name    string // empty where there is one day only
	Network *network.Network
	Rows    []study.WindowResult
}

// WriteHours writes hours.csv, one row per day, start and end. Columns: max_queue_m, max_queue_time and reaches count
// only queues that the base does not have, max_delay_min is the worst delay of a vehicle above the base. A window that
// does not fit into the study's period is `not computed`; one that contains a shorter closure that broke a limit is
// not permitted and has no numbers.
func WriteHours(dir string, days []Day) error {
	s, err := newSheet(dir, "hours.csv", "day,start,end,max_queue_m,max_queue_time,max_delay_min,added_delay_veh_hours,reaches,limit_broken,permitted")
	if err != nil {
		return err
	}
	for i := range days {
		for k := range days[i].Rows {
			row := &days[i].Rows[k]
			s.text(days[i].Name)
			s.clock(row.Start)
			s.clock(row.End)
			s.window(row, days[i].Network)
			s.text(row.Limit)
			s.text(Permitted(row.State))
			s.end()
		}
	}
	return s.close()
}

// Permitted says whether a window may be used: yes, no or not computed.
func Permitted(state study.State) string {
	if state == study.NotComputed {
		return "not computed"
	}
	return yes(state == study.Kept)
}

// window writes what a closure does: queue, its time, delay, added delay, nodes reached.
func (s *sheet) window(row *study.WindowResult, n *network.Network) {
	s.number(row.Queue, 1)
	s.clock(row.QueueAt)
	s.number(row.Delay/60, 2)
	s.number(row.Added/perHour, 3)
	var names []string
	for _, node := range row.Reaches {
		names = append(names, n.Nodes[node].Name)
	}
	s.text(strings.Join(names, " "))
}

// WriteOverrun writes overrun.csv: the closure as planned and reopened late. The column cost stands only where there is
// a cost; it holds the currency in its header.
func WriteOverrun(dir string, rows []study.Late, n *network.Network, cost *study.Cost) error {
	header := "reopened,late_min,added_delay_veh_hours,further_delay_veh_hours,max_queue_m,max_queue_time,max_delay_min,gone,reaches"
	if cost != nil {
		header += ",cost_" + strings.ReplaceAll(cost.Currency, ",", " ")
	}
	s, err := newSheet(dir, "overrun.csv", header)
	if err != nil {
		return err
	}
	for i := range rows {
		row := &rows[i]
		s.clock(row.End)
		s.number(row.Late/60, 0)
		s.number(row.Added/perHour, 3)
		s.number(row.Further/perHour, 3)
		s.number(row.Queue, 1)
		s.clock(row.QueueAt)
		s.number(row.Delay/60, 2)
		s.clock(row.Gone)
		var names []string
		for _, node := range row.Reaches {
			names = append(names, n.Nodes[node].Name)
		}
		s.text(strings.Join(names, " "))
		if cost != nil {
			s.number(row.Money, 2)
		}
		s.end()
	}
	return s.close()
}
