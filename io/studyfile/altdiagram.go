package studyfile

import (
	"fmt"
	"maps"
	"slices"
	"strings"

	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
	"example.org/tailback/network/unit"
)

// diagramChange reads one [[alternative.diagram_change]]: every link with the named diagram gets the new shape. Its
// parameters are those given here, then the link's own, then as many of the old diagram's as the new shape has room
// for, free speed and capacity first. Ids of nodes and links stay as they are.
func (d *altDraft) diagramChange(t *table) {
	t.known("diagram " + diagramKeys)
	name, shape, over := t.text("diagram"), t.text("shape"), t.params()
	drop := t.quantity("discharge_drop", unit.Share, -1)
	if name == "" && !t.bad {
		t.fault("diagram", "", "`diagram` must name a diagram of the study")
	} else if !slices.Contains(d.diagrams, name) && !t.bad {
		t.fault("diagram", "the study has `"+strings.Join(d.diagrams, "`, `")+"`", "the study has no [diagram.%s]", name)
	}
	if drop >= 1 {
		t.fault("discharge_drop", "", "a drop of %g leaves nothing: it must be below 1", drop)
	}
	links, count, waves := slices.Clone(d.road.Links), 0, false
	for i := range links {
		l := &links[i]
		if t.bad || d.diagramOf(l) != name {
			continue
		}
		count++
		old := l.Diagram.MaxWaveSpeed()
		if shape != "" {
			l.Shape = shape
		}
		if err := d.reshape(l, over); err != nil {
			t.fault("shape", "", "link `%s`: %v", l.Name, err)
		} else {
			waves = waves || l.Diagram.MaxWaveSpeed() != old
		}
		if drop >= 0 {
			l.Drop = drop
		}
	}
	if t.bad {
		return
	}
	road, err := network.New(d.road.Nodes, links)
	if err != nil {
		panic("studyfile: " + err.Error())
	}
	d.road = road
	d.say(func(unit.System) string {
		return fmt.Sprintf("diagram `%s` of %d links: %s", name, count, diagramWords(shape, t))
	})
	if count == 0 {
		d.warn(t.at("diagram"), fmt.Sprintf("no link uses the diagram `%s`: the change has no effect", name), "")
	}
	if waves {
		d.alt.Notes = append(d.alt.Notes, fmt.Sprintf("diagram `%s` has waves of another speed than the base's: cells and step may differ from the base's", name))
	}
}

// diagramWords lists what a diagram change gives, in the study's words.
func diagramWords(shape string, t *table) string {
	var list []string
	if shape != "" {
		list = append(list, "shape "+shape)
	}
	for _, key := range slices.Sorted(maps.Keys(t.keys)) {
		if key != "diagram" && key != "shape" {
			list = append(list, fmt.Sprintf("%s %v", key, t.keys[key]))
		}
	}
	return strings.Join(list, ", ")
}

// diagramOf is the name of a link's diagram: its own, else its kind where the study has a diagram of that name, else
// `default`.
func (d *altDraft) diagramOf(l *network.Link) string {
	if name, ok := l.Properties["diagram"].(string); ok {
		return name
	}
	if slices.Contains(d.diagrams, l.Kind) {
		return l.Kind
	}
	return "default"
}

// reshape gives a link a diagram of its shape with other parameters.
func (d *altDraft) reshape(l *network.Link, over diagram.Params) error {
	own := map[string]struct{ to, from *float64 }{
		"free_speed": {&over.FreeSpeed, &l.Params.FreeSpeed}, "capacity": {&over.Capacity, &l.Params.Capacity}, "jam_density": {&over.JamDensity, &l.Params.JamDensity},
	}
	for key, place := range own {
		if l.Properties[key] != nil {
			*place.to = *place.from
		}
	}
	if over.FreeSpeed == 0 && over.Points == nil {
		over.FreeSpeed = l.Params.FreeSpeed // so that of the others some may be left out
	}
	p, err := l.Params.Override(l.Shape, over)
	if err != nil {
		return err
	}
	dia, err := diagram.New(l.Shape, p)
	if err != nil {
		return err
	}
	l.Params, l.Diagram = p, dia
	return nil
}
