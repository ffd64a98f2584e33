package studyfile

import (
	"strings"

	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
	"example.org/tailback/network/unit"
)

// Diagram is a [diagram.NAME] of the study.
type Diagram struct {
	Name   string
	Shape  string
	Params diagram.Params
	Drop   float64
	Curve  diagram.Diagram
	Links  int // how many links use it
}

// diagramKeys are the keys of a [diagram.NAME].
const diagramKeys = "shape free_speed capacity jam_density wave_speed critical_density exponent points discharge_drop"

// diagrams reads every [diagram.NAME].
func (d *draft) diagrams() {
	t := d.root.table("diagram")
	if t == nil {
		if !d.root.has("diagram") {
			d.root.fault("", `add [diagram.default] with shape = "triangular", free_speed, capacity and jam_density`, "a study needs at least one [diagram.NAME]")
		}
		return
	}
	for _, name := range sortedKeys(t.keys) {
		s := t.table(name)
		if s == nil {
			continue
		}
		s.known(diagramKeys)
		g := Diagram{Name: name, Shape: s.text("shape"), Params: s.params(), Drop: s.quantity("discharge_drop", unit.Share, 0)}
		switch {
		case s.bad:
		case g.Shape == "":
			s.fault("", "", "a diagram needs a `shape`: %s", strings.Join(shapeNames(), ", "))
		case g.Drop >= 1:
			s.fault("discharge_drop", "", "a drop of %g leaves nothing: it must be below 1", g.Drop)
		default:
			var err error
			if g.Curve, err = diagram.New(g.Shape, g.Params); err != nil {
				s.fault("shape", "", "%v", err)
			}
		}
		d.Diagrams = append(d.Diagrams, g)
	}
}

func shapeNames() []string {
	var names []string
	for _, s := range diagram.Shapes() {
		names = append(names, s.Name)
	}
	return names
}

// params reads the parameters of a shape.
func (t *table) params() diagram.Params {
	p := diagram.Params{
		FreeSpeed: t.quantity("free_speed", unit.Speed, 0), Capacity: t.quantity("capacity", unit.FlowPerLane, 0),
		JamDensity: t.quantity("jam_density", unit.DensityPerLane, 0), WaveSpeed: t.quantity("wave_speed", unit.Speed, 0),
		CriticalDensity: t.quantity("critical_density", unit.DensityPerLane, 0), Exponent: t.number("exponent", 0),
	}
	if !t.has("points") {
		return p
	}
	list, _ := t.keys["points"].([]any)
	for _, x := range list {
		pair, _ := x.([]any)
		k, ok := 0.0, len(pair) == 2
		q := 0.0
		if ok {
			k, ok = plain(pair[0])
		}
		if ok {
			q, ok = plain(pair[1])
		}
		if !ok {
			t.fault("points", "", "`points` must hold pairs of numbers, [density in veh/km/lane, flow in veh/h/lane]")
			return p
		}
		p.Points = append(p.Points, [2]float64{k * unit.VehPerKilometre, q * unit.VehPerHour})
	}
	if len(list) == 0 {
		t.fault("points", "", "`points` must be a list of pairs [density in veh/km/lane, flow in veh/h/lane]")
	}
	return p
}

// plain is a TOML number as a float.
func plain(x any) (float64, bool) {
	switch v := x.(type) {
	case int64:
		return float64(v), true
	case float64:
		return v, v == v && v-v == 0 // neither NaN nor infinite
	}
	return 0, false
}

// standIn takes the place of a diagram that could not be read, so that the rest of the network can be checked.
var standIn, _ = diagram.New("triangular", diagram.Params{FreeSpeed: 30, WaveSpeed: 5, JamDensity: 0.15})

// chooseDiagram gives a link its diagram: the one it names, else the one named like its kind, else `default`; with the
// link's own free speed, capacity and jam density.
func (d *draft) chooseDiagram(r *road, ft *feature, l *network.Link) {
	l.Diagram = standIn
	name := ft.textOf("diagram")
	g := d.diagram(name)
	if name != "" && g == nil {
		r.fault(ft, "", "`diagram` names `%s`, but the study has no [diagram.%s]", name, name)
		return
	}
	if g == nil {
		g = d.diagram(l.Kind)
	}
	if g == nil {
		g = d.diagram("default")
	}
	if g == nil {
		if len(d.Diagrams) > 0 {
			r.fault(ft, "add [diagram.default], or give the link a `diagram`", "no diagram fits: the study has none named like its kind `%s` and no default", l.Kind)
		}
		return
	}
	if g.Curve == nil {
		return // reported where it stands
	}
	g.Links++
	l.Shape, l.Params, l.Diagram, l.Drop = g.Shape, g.Params, g.Curve, g.Drop
	over := diagram.Params{}
	own := false
	for key, place := range map[string]*float64{"free_speed": &over.FreeSpeed, "capacity": &over.Capacity, "jam_density": &over.JamDensity} {
		kind := map[string]unit.Kind{"free_speed": unit.Speed, "capacity": unit.FlowPerLane, "jam_density": unit.DensityPerLane}[key]
		if x, given := r.quantity(ft, key, kind); given {
			if !(x > 0) {
				r.fault(ft, "", "`%s` must be more than 0", key)
				return
			}
			*place, own = x, true
		}
	}
	if !own {
		return
	}
	p, err := g.Params.Override(g.Shape, over)
	if err == nil {
		l.Params = p
		l.Diagram, err = diagram.New(g.Shape, p)
	}
	if err != nil {
		r.fault(ft, "", "its own values do not go with [diagram.%s]: %v", g.Name, err)
		l.Diagram = g.Curve
	}
}

func (d *draft) diagram(name string) *Diagram {
	for i := range d.Diagrams {
		if d.Diagrams[i].Name == name {
			return &d.Diagrams[i]
		}
	}
	return nil
}
