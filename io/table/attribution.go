package table

import "example.org/tailback/ctm/study"

// WriteAttribution writes attribution.csv: the bottlenecks of an alternative against those of its base.
func WriteAttribution(dir string, r *study.Result, list []study.Attribution) error {
	s, err := newSheet(dir, "attribution.csv", "link,at_m,what,to_link,to_at_m,base_delay_veh_hours,delay_veh_hours,change_veh_hours,onset,clearance,takes_over")
	if err != nil {
		return err
	}
	for i := range list {
		a := &list[i]
		s.place(r, a.Place)
		s.text(a.What)
		s.place(r, a.To)
		s.number(a.Base/perHour, 3)
		s.number(a.Alt/perHour, 3)
		s.number((a.Alt-a.Base)/perHour, 3)
		s.clock(a.Onset)
		s.clock(a.Clearance)
		s.text(yes(a.TakesOver))
		s.end()
	}
	return s.close()
}
