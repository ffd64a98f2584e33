package studyfile

import (
	"fmt"
	"sort"
	"strings"

	"example.org/tailback/ctm/measure"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
	"example.org/tailback/network/unit"
)

// workZone takes a closure's capacity, discharge and free speed from the work zone's description, where the closure
// itself does not give them.
func (d *altDraft) workZone(closure, t *table, c *measure.LaneClosure) {
	link := &d.road.Links[c.Stretch[0].Link]
	for _, s := range c.Stretch[1:] { // the tightest link counts
		if l := &d.road.Links[s.Link]; l.Lanes < link.Lanes {
			link = l
		}
	}
	if c.Lanes >= link.Lanes {
		closure.fault("work_zone", "", "all lanes of link `%s` are closed: a work zone's capacity needs an open lane", link.Name)
		return
	}
	heavy := d.heavy(t)
	var e measure.Estimate
	switch method := t.text("method"); method {
	case "", "handbook":
		t.known("method barrier area lateral_distance light speed_limit normal_speed_limit ramps_per_km ramp_density alpha heavy_vehicles heavy_equivalent coefficients")
		w := d.handbook(t, c, link)
		w.Heavy = heavy
		e = w.Estimate()
	case "rule":
		t.known("method term base intensity ramp heavy_vehicles heavy_equivalent")
		r := d.rule(t, c, link)
		r.Heavy = heavy
		var err error
		if e, err = r.Estimate(); err != nil {
			t.fault("term", `use term = "short", or give capacity`, "%v", err)
		}
	default:
		t.fault("method", "", "unknown method `%s`: it is `handbook` (the default) or `rule`", method)
	}
	switch {
	case t.bad:
	case !(e.Capacity > 0):
		closure.fault("work_zone", "check its inputs and coefficients, or give `capacity`", "the method leaves no capacity")
	case e.FreeSpeed < 0:
		closure.fault("work_zone", "check its speed limits and coefficients", "the method gives a free speed below 0")
	}
	if closure.bad = closure.bad || t.bad; closure.bad {
		return
	}
	d.use(c, &e)
}

// use puts an estimate into a closure and notes which numbers it was.
func (d *altDraft) use(c *measure.LaneClosure, e *measure.Estimate) {
	given := []string{}
	if c.Capacity == 0 {
		c.Capacity = e.Capacity
		if c.Discharge == 0 {
			c.Discharge = e.Discharge
		}
	} else {
		given = append(given, "capacity")
	}
	if c.Speed == 0 || e.FreeSpeed > 0 && e.FreeSpeed < c.Speed {
		c.Speed = e.FreeSpeed
	}
	source := e.Source
	if len(given) > 0 {
		source = "capacity given in the study; free speed by the " + e.Source
	}
	if c.Source != "" {
		source = c.Source + "; " + source
	}
	c.Source = source
	where := d.road.Links[c.Stretch[0].Link].Name
	for _, note := range e.Notes {
		d.alt.Notes = append(d.alt.Notes, fmt.Sprintf("work zone on link `%s`, %s: %s", where, e.Source, note))
	}
}

// heavy reads the heavy vehicles of a work zone. Where classes carry passenger-car equivalents, flows are in passenger
// cars already.
func (d *altDraft) heavy(t *table) measure.HeavyVehicles {
	h := measure.HeavyVehicles{Share: t.quantity("heavy_vehicles", unit.Share, 0), Equivalent: t.number("heavy_equivalent", 0)}
	if h.Share > 1 {
		t.fault("heavy_vehicles", "", "a share of %g is above 1", h.Share)
	}
	if t.has("heavy_equivalent") && h.Equivalent < 1 {
		t.fault("heavy_equivalent", "", "an equivalent of %g is below 1 passenger car", h.Equivalent)
	}
	for _, class := range d.base.Demand.Classes {
		if h.Share > 0 && class.PCE != 1 {
			t.fault("heavy_vehicles", "leave it out", "class `%s` has a passenger-car equivalent of %g: its vehicles would count twice", class.Name, class.PCE)
			break
		}
	}
	return h
}

// handbook reads what the handbook method asks for.
func (d *altDraft) handbook(t *table, c *measure.LaneClosure, link *network.Link) *measure.WorkZone {
	w := &measure.WorkZone{
		Lanes: link.Lanes, Open: link.Lanes - c.Lanes,
		Hard: t.choice("barrier", "soft", "hard"), Rural: t.choice("area", "urban", "rural"), Night: t.choice("light", "day", "night"),
		Lateral: t.quantity("lateral_distance", unit.Length, 0),
		Limit:   t.quantity("speed_limit", unit.Speed, c.Speed), NormalLimit: t.quantity("normal_speed_limit", unit.Speed, 0),
		Alpha:    t.quantity("alpha", unit.Share, measure.DefaultAlpha),
		Capacity: diagram.Capacity(link.Diagram), FreeSpeed: link.Diagram.FreeSpeed(),
		Coef: measure.HandbookCoefficients(),
	}
	if w.Lateral > 12*unit.Foot*(1+1e-9) {
		t.fault("lateral_distance", "", "a lateral distance of %.4g m is outside the method: 0 to 12 ft (3.66 m)", w.Lateral)
	}
	if w.Alpha >= 1 {
		t.fault("alpha", "", "a drop of %g is not below 1", w.Alpha)
	}
	w.RampDensity = d.ramps(t, c)
	if coef := t.table("coefficients"); coef != nil {
		d.coefficients(coef, &w.Coef)
		t.bad = t.bad || coef.bad
	}
	return w
}

// choice reads one of two words, of which the first is the default; it reports whether it is the second.
func (t *table) choice(key, first, second string) bool {
	switch word := t.text(key); word {
	case "", first:
	case second:
		return true
	default:
		t.fault(key, "", "`%s` is `%s`: it must be `%s` or `%s`", key, word, first, second)
	}
	return false
}

// ramps reads the ramp density, in ramps per km (ramps_per_km) or per mile (ramp_density); by default it is counted on
// the network.
func (d *altDraft) ramps(t *table, c *measure.LaneClosure) float64 {
	switch {
	case t.has("ramps_per_km"):
		return t.positive("ramps_per_km") / unit.Kilometre
	case t.has("ramp_density"):
		return t.positive("ramp_density") / unit.Mile
	}
	s := &c.Stretch[len(c.Stretch)/2]
	middle := (s.From + min(s.To, d.road.Links[s.Link].Length)) / 2
	density := measure.RampDensity(d.road, s.Link, middle)
	d.alt.Notes = append(d.alt.Notes, fmt.Sprintf("work zone on link `%s`: %.2g ramps per km (%.2g per mile), counted on the network within 3 miles to either side",
		d.road.Links[s.Link].Name, density*unit.Kilometre, density*unit.Mile))
	return density
}

// positive reads a number that must not be negative.
func (t *table) positive(key string) float64 {
	x := t.number(key, 0)
	if !(x >= 0) {
		t.fault(key, "", "`%s` is %g: it must be 0 or more", key, x)
	}
	return x
}

// coefficients reads overrides of the handbook's coefficients, in its own units.
func (d *altDraft) coefficients(t *table, c *measure.Coefficients) {
	places := map[string]*float64{
		"base": &c.Base, "severity": &c.Severity, "barrier": &c.Barrier, "area": &c.Area, "lateral": &c.Lateral, "light": &c.Light,
		"speed_base": &c.SpeedBase, "speed_ratio": &c.SpeedRatio, "speed_limit": &c.SpeedLimit, "speed_severity": &c.SpeedSeverity,
		"speed_barrier": &c.SpeedBarrier, "speed_light": &c.SpeedLight, "speed_ramps": &c.SpeedRamps,
		"ratio_low": &c.RatioLow, "ratio_high": &c.RatioHigh,
	}
	var words, changed []string
	for key, place := range places {
		words = append(words, key)
		if t.has(key) {
			*place = t.number(key, *place)
			changed = append(changed, fmt.Sprintf("%s = %g", key, *place))
		}
	}
	sort.Strings(words)
	t.known(strings.Join(words, " "))
	if len(changed) > 0 {
		sort.Strings(changed)
		d.alt.Notes = append(d.alt.Notes, "work-zone coefficients changed in the study: "+strings.Join(changed, ", "))
	}
}

// rule reads what the rule of thumb asks for.
func (d *altDraft) rule(t *table, c *measure.LaneClosure, link *network.Link) *measure.RuleOfThumb {
	r := &measure.RuleOfThumb{
		Lanes: link.Lanes, Open: link.Lanes - c.Lanes, LongTerm: t.choice("term", "short", "long"),
		Base: t.quantity("base", unit.FlowPerLane, 0), Intensity: t.number("intensity", 0) * unit.VehPerHour,
		Ramp: t.number("ramp", 0) * unit.VehPerHour, Capacity: diagram.Capacity(link.Diagram),
	}
	if i := t.number("intensity", 0); i < -160 || i > 160 {
		t.fault("intensity", "", "an intensity of %g pc/h per lane is outside the rule: -160 to 160", i)
	}
	if x := t.number("ramp", 0); x < 0 || x > 160 {
		t.fault("ramp", "", "%g pc/h per lane for a ramp is outside the rule: 0 to 160", x)
	}
	return r
}
