package studyfile

import (
	"math"
	"strings"
	"testing"

	"example.org/tailback/ctm/study"
	"example.org/tailback/demand"
)

var carsAndTrucks = []demand.Class{{Name: "car", PCE: 1}, {Name: "truck", PCE: 2}}

func readCost(text string) (*study.Cost, error) {
	d := &draft{f: &faults{}}
	doc, ok := decode("study.toml", []byte(text), d.f)
	if !ok {
		return nil, d.f.err()
	}
	d.root = doc.root(d.f)
	c := d.cost(carsAndTrucks)
	return c, d.f.err()
}

const goodCost = `[cost]
currency = "USD"
value_of_time = { car = 18, truck = 30 }
occupancy = { car = 1.67 }
operating = 0.45
source = "own survey"
`

func TestCost(t *testing.T) {
	c, err := readCost(goodCost)
	if err != nil {
		t.Fatal(err)
	}
	// 1.67 persons at 18 per hour; a truck has no occupancy, so its 30 are for the vehicle.
	for i, want := range []float64{1.67 * 18 / 3600, 30.0 / 3600} {
		if math.Abs(c.Time[i]-want) > 1e-12 {
			t.Errorf("class %d: %v per second, want %v", i, c.Time[i], want)
		}
	}
	if c.Currency != "USD" || c.Source != "own survey" || math.Abs(c.Operating-0.00045) > 1e-12 {
		t.Errorf("%+v", c)
	}
	if c, err := readCost("title = \"none\""); c != nil || err != nil {
		t.Errorf("without [cost]: %+v, %v", c, err)
	}
}

func TestCostFaults(t *testing.T) {
	for _, c := range []struct{ old, put, want string }{
		{`currency = "USD"`, ``, "study.toml:1:2: [cost] needs a `currency`"},
		{`source = "own survey"`, ``, "[cost] needs a `source`"},
		{`value_of_time = { car = 18, truck = 30 }`, ``, "[cost] needs `value_of_time` for each class"},
		{`truck = 30`, `lorry = 30`, "unknown key `lorry`"},
		{`, truck = 30`, ``, "study.toml:3:1: class `truck` has no value of time"},
		{`car = 18`, `car = -18`, "`car` is -18: it must be 0 or more"},
		{`car = 18`, `car = "18"`, "`car` must be a number"},
		{`operating = 0.45`, `operatign = 0.45`, "did you mean `operating`?"},
	} {
		_, err := readCost(strings.Replace(goodCost, c.old, c.put, 1))
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s -> %s: %v\nwant %q", c.old, c.put, err, c.want)
		}
	}
}
