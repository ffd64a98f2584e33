package table

import (
	"example.org/tailback/ctm/study"
)

// Factors from SI to the units of the columns.
const (
	perHour = 3600.0
	perKm   = 1000.0
	kmh     = 3.6
)

func writeLinks(dir string, r *study.Result) error {
	s, err := newSheet(dir, "links.csv", "start,end,link,inflow_veh_per_h,outflow_veh_per_h,density_veh_per_km,speed_km_per_h,vehicles,queue_m,queued_veh,delay_veh_hours,travel_veh_hours,travel_veh_km")
	if err != nil {
		return err
	}
	for k, rows := range r.Links.Rows {
		start, end := r.Links.Times[k], r.Links.Times[k+1]
		for i := range rows {
			row, link := &rows[i], &r.Scenario.Network.Links[i]
			s.clock(start)
			s.clock(end)
			s.text(link.Name)
			s.number(row.In/(end-start)*perHour, 3)
			s.number(row.Out/(end-start)*perHour, 3)
			s.number(row.Seconds/(end-start)/link.Length*perKm, 4)
			s.number(row.Speed(link.Diagram.FreeSpeed())*kmh, 3)
			s.number(row.Vehicles, 4)
			s.number(row.Queue, 1)
			s.number(row.Queued, 3)
			s.number(row.Delay/perHour, 6)
			s.number(row.Seconds/perHour, 6)
			s.number(row.Metres/perKm, 5)
			s.end()
		}
	}
	return s.close()
}

func writeEntries(dir string, r *study.Result) error {
	s, err := newSheet(dir, "entries.csv", "start,end,link,demand_veh_per_h,entered_veh_per_h,waiting_veh,waiting_veh_hours")
	if err != nil {
		return err
	}
	for k, rows := range r.Entries.Rows {
		start, end := r.Links.Times[k], r.Links.Times[k+1]
		for i := range rows {
			s.clock(start)
			s.clock(end)
			s.text(linkName(r, r.Entries.Links[i]))
			s.number(rows[i].Wanted/(end-start)*perHour, 3)
			s.number(rows[i].Entered/(end-start)*perHour, 3)
			s.number(rows[i].Waiting, 3)
			s.number(rows[i].WaitingSeconds/perHour, 6)
			s.end()
		}
	}
	return s.close()
}

func writeNetwork(dir string, r *study.Result) error {
	s, err := newSheet(dir, "network.csv", "start,end,entered_veh,left_veh,inside_veh,waiting_veh,travel_veh_hours,travel_veh_km,delay_veh_hours")
	if err != nil {
		return err
	}
	for k, row := range r.Entries.Network {
		var seconds, metres float64
		delay := row.WaitingSeconds
		for i := range r.Links.Rows[k] {
			link := &r.Links.Rows[k][i]
			seconds, metres, delay = seconds+link.Seconds, metres+link.Metres, delay+link.Delay
		}
		s.clock(r.Links.Times[k])
		s.clock(r.Links.Times[k+1])
		s.number(row.Entered, 4)
		s.number(row.Left, 4)
		s.number(row.Inside, 4)
		s.number(row.Waiting, 4)
		s.number(seconds/perHour, 6)
		s.number(metres/perKm, 5)
		s.number(delay/perHour, 6)
		s.end()
	}
	return s.close()
}

func writeCorridors(dir string, r *study.Result) error {
	s, err := newSheet(dir, "corridors.csv", "depart,corridor,travel_time_s,free_travel_time_s")
	if err != nil {
		return err
	}
	for _, depart := range r.Links.Times[:len(r.Links.Times)-1] {
		for i := range r.Corridors.Chains {
			s.clock(depart)
			s.text(r.Corridors.Chains[i].Name)
			s.number(r.Corridors.TravelTime(i, depart), 2)
			s.number(r.Corridors.FreeTime(i), 2)
			s.end()
		}
	}
	return s.close()
}
