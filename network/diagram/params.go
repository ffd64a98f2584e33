package diagram

import (
	"fmt"
	"math"
	"math/bits"
	"slices"
	"strconv"
	"strings"

	"example.org/tailback/network/unit"
)

// Params are the parameters of a shape, per lane. A zero means that it is not given.
type Params struct {
	FreeSpeed       float64      // speed on the empty road, m/s
	Capacity        float64      // the largest flow, veh/s
	JamDensity      float64      // veh/m
	WaveSpeed       float64      // speed of an upstream wave in standing traffic, positive, m/s
	CriticalDensity float64      // density at capacity, veh/m
	Exponent        float64      // of the shapes that have one
	Points          [][2]float64 // density in veh/m and flow in veh/s, of `piecewise`
}

// keys is a set of parameters.
type keys uint8

const (
	freeSpeed keys = 1 << iota
	capacity
	criticalDensity
	jamDensity
	waveSpeed
	exponent
	points
	none keys = 0
)

// names are the keys as users write them, in the order in which messages list them.
var names = [...]string{"free_speed", "capacity", "critical_density", "jam_density", "wave_speed", "exponent", "points"}

// String lists a set as "free_speed, capacity".
func (s keys) String() string {
	var list []string
	for i, name := range names {
		if s&(1<<i) != 0 {
			list = append(list, name)
		}
	}
	return strings.Join(list, ", ")
}

// value is the place of a single parameter; nil for points.
func (p *Params) value(key keys) *float64 {
	switch key {
	case freeSpeed:
		return &p.FreeSpeed
	case capacity:
		return &p.Capacity
	case criticalDensity:
		return &p.CriticalDensity
	case jamDensity:
		return &p.JamDensity
	case waveSpeed:
		return &p.WaveSpeed
	case exponent:
		return &p.Exponent
	}
	return nil
}

// given is the set of parameters that are not zero.
func (p Params) given() keys {
	var s keys
	for key := freeSpeed; key < points; key <<= 1 {
		if *p.value(key) != 0 {
			s |= key
		}
	}
	if p.Points != nil {
		s |= points
	}
	return s
}

// only is p without the parameters that are not in the set.
func (p Params) only(set keys) Params {
	for key := freeSpeed; key < points; key <<= 1 {
		if set&key == 0 {
			*p.value(key) = 0
		}
	}
	if set&points == 0 {
		p.Points = nil
	}
	return p
}

// check returns an error for the first parameter that is negative or not finite.
func (p Params) check() error {
	for key := freeSpeed; key < points; key <<= 1 {
		if x := *p.value(key); !(x >= 0) || math.IsInf(x, 1) {
			return fmt.Errorf("%s is %v: it must be positive and finite", key, x)
		}
	}
	return nil
}

// say writes a parameter's value with its unit, as in "20 km/h".
func say(key keys, x float64) string {
	switch key {
	case freeSpeed, waveSpeed:
		return number(x/unit.KilometrePerHour) + " km/h"
	case capacity:
		return number(x/unit.VehPerHour) + " veh/h/lane"
	case criticalDensity, jamDensity:
		return number(x/unit.VehPerKilometre) + " veh/km/lane"
	}
	return number(x)
}

// number writes x with at most two decimals, or four digits where it is small.
func number(x float64) string {
	if math.Abs(x) < 1 {
		return strconv.FormatFloat(x, 'g', 4, 64)
	}
	return strconv.FormatFloat(math.Round(x*100)/100, 'f', -1, 64)
}

// dropOrder is the order in which Override gives up parameters.
var dropOrder = [...]keys{waveSpeed, criticalDensity, exponent, jamDensity, capacity, freeSpeed}

// Override replaces parameters of a shape by those given in over, such as a link's own capacity. Where the result
// says too much and disagrees, it leaves out the fewest of the parameters that are not in over with which the shape
// builds, and rather the ones that come first in the order wave_speed, critical_density, exponent, jam_density,
// capacity, free_speed. If there is no such choice the error is New's for the whole set.
func (p Params) Override(shape string, over Params) (Params, error) {
	set := over.given()
	for key := freeSpeed; key < points; key <<= 1 {
		if set&key != 0 {
			*p.value(key) = *over.value(key)
		}
	}
	if set&points != 0 {
		p.Points = over.Points
	}
	_, err := New(shape, p)
	if err == nil || set == none {
		return p, err
	}
	for _, drop := range choices(p.given() &^ set) {
		less := p.only(^drop)
		if _, e := New(shape, less); e == nil {
			return less, nil
		}
	}
	return p, err
}

// choices lists the sets of droppable parameters: the smallest first and, of one size, the one whose last member
// comes first in dropOrder.
func choices(from keys) []keys {
	var sets []keys
	for mask := 1; mask < 1<<len(dropOrder); mask++ {
		set := none
		for i, key := range dropOrder {
			if mask&(1<<i) != 0 {
				set |= key
			}
		}
		if set&^from == none {
			sets = append(sets, set)
		}
	}
	slices.SortStableFunc(sets, func(a, b keys) int {
		return bits.OnesCount8(uint8(a)) - bits.OnesCount8(uint8(b))
	})
	return sets
}
