package table

import (
	"strings"

	"example.org/tailback/ctm/observe"
	"example.org/tailback/ctm/study"
)

// place writes a link and a position on it.
func (s *sheet) place(r *study.Result, p observe.Place) {
	s.text(linkName(r, p.Link))
	s.number(p.At, 1)
}

func writeQueues(dir string, r *study.Result) error {
	s, err := newSheet(dir, "queues.csv", "time,queue,head_link,head_at_m,tail_link,tail_at_m,length_m,queued_veh,links")
	if err != nil {
		return err
	}
	for i := range r.Queues.Rows {
		q := &r.Queues.Rows[i]
		names := make([]string, len(q.Links))
		for k, l := range q.Links {
			names[k] = linkName(r, l)
		}
		s.clock(q.Time)
		s.whole(q.Queue)
		s.place(r, q.Head)
		s.place(r, q.Tail)
		s.number(q.Length, 1)
		s.number(q.Vehicles, 3)
		s.text(strings.Join(names, " "))
		s.end()
	}
	return s.close()
}

func writeBottlenecks(dir string, r *study.Result) error {
	s, err := newSheet(dir, "bottlenecks.csv", "queue,link,at_m,onset,clearance,throughput_veh_per_h,max_queue_m,max_queue_time,max_queued_veh,farthest_m,farthest_link,farthest_at_m,farthest_time,delay_veh_hours")
	if err != nil {
		return err
	}
	for i := range r.Queues.Bottlenecks {
		b := &r.Queues.Bottlenecks[i]
		s.whole(b.Queue)
		s.place(r, b.Place)
		s.clock(b.Onset)
		s.clock(b.Clearance)
		s.number(b.Throughput*perHour, 3)
		s.number(b.MaxQueue, 1)
		s.clock(b.MaxQueueTime)
		s.number(b.MaxVehicles, 3)
		s.number(b.Farthest, 1)
		s.place(r, b.FarthestAt)
		s.clock(b.FarthestTime)
		s.number(b.Delay/perHour, 6)
		s.end()
	}
	return s.close()
}

func writeThroughput(dir string, r *study.Result) error {
	s, err := newSheet(dir, "throughput.csv", "start,end,queue,link,at_m,throughput_veh_per_h")
	if err != nil {
		return err
	}
	for i := range r.Queues.Throughput {
		t := &r.Queues.Throughput[i]
		s.clock(t.Start)
		s.clock(t.End)
		s.whole(t.Queue)
		s.place(r, t.Place)
		s.number(t.Flow*perHour, 3)
		s.end()
	}
	return s.close()
}

func writeSpillback(dir string, r *study.Result) error {
	s, err := newSheet(dir, "spillback.csv", "queue,link,node,reached,left")
	if err != nil {
		return err
	}
	n := r.Scenario.Network
	for i := range r.Queues.Spillbacks {
		b := &r.Queues.Spillbacks[i]
		s.whole(b.Queue)
		s.text(n.Links[b.Link].Name)
		s.text(n.Nodes[n.Links[b.Link].From].Name)
		s.clock(b.Reached)
		s.clock(b.Left)
		s.end()
	}
	return s.close()
}
