package studyfile

import (
	"example.org/tailback/ctm/study"
	"example.org/tailback/demand"
)

// cost reads [cost], nil where the study has none: nothing is assumed.
//
//	[cost]
//	currency      = "USD"
//	value_of_time = { car = 18, truck = 30 }   # money per hour of a person, or of a vehicle where occupancy has none
//	occupancy     = { car = 1.67 }             # persons per vehicle
//	operating     = 0.45                       # money per vehicle-km, optional
//	source        = "where the values come from"
func (d *draft) cost(classes []demand.Class) *study.Cost {
	t := d.root.table("cost")
	if t == nil {
		return nil
	}
	t.known("currency value_of_time occupancy operating source")
	c := &study.Cost{Currency: t.text("currency"), Source: t.text("source"), Time: make([]float64, len(classes))}
	for key, value := range map[string]string{"currency": c.Currency, "source": c.Source} {
		if value == "" {
			t.fault(at(t, key), "", "[cost] needs a `%s`", key)
		}
	}
	c.Operating = amount(t, "operating") / 1000
	values, persons := t.table("value_of_time"), t.table("occupancy")
	words := ""
	for i := range classes {
		words += " " + classes[i].Name
	}
	if values == nil {
		t.fault(at(t, "value_of_time"), "such as { "+classes[0].Name+" = 18 }, in money per hour", "[cost] needs `value_of_time` for each class")
		return c
	}
	values.known(words)
	if persons != nil {
		persons.known(words)
	}
	for i := range classes {
		name := classes[i].Name
		if !values.has(name) {
			t.fault("value_of_time", "", "class `%s` has no value of time", name)
		}
		c.Time[i] = amount(values, name) / 3600
		if persons != nil && persons.has(name) {
			c.Time[i] *= amount(persons, name)
		}
	}
	return c
}

// amount reads a number that is not negative; 0 where it is not given.
func amount(t *table, key string) float64 {
	x := t.number(key, 0)
	if !(x >= 0 && x < 1e12) {
		t.fault(key, "", "`%s` is %g: it must be 0 or more", key, x)
		return 0
	}
	return x
}
