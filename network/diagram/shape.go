package diagram

import (
	"fmt"
	"math"
	"strings"
)

// Shape describes a kind of diagram that New builds by name.
type Shape struct {
	Name         string
	Combinations []string // sets of parameters that determine it, as "free_speed, capacity, jam_density"
	Source       string
	Notes        string // what the shape cannot do, or ""

	lacks keys  // parameters that the shape does not have
	ways  []way // tried in this order
	make  maker
}

// way is one set of parameters that determines a shape.
type way struct {
	keys keys
	// complete computes what the maker needs from the parameters of the set, or says why they contradict.
	complete func(p Params) (Params, error)
}

// maker builds a diagram from the parameters that its file names, and returns all that the shape has.
type maker func(p Params) (Diagram, Params, error)

// tolerance is the share by which a parameter that is given twice over may differ from what the others say. It
// leaves room for values rounded to four digits.
const tolerance = 1e-3

// Shapes lists the shapes that New knows.
func Shapes() []Shape {
	shapes := []Shape{
		triangular(), trapezoidal(), greenshields(), greenberg(), underwood(), drake(), pipesMunjal(),
		newellFranklin(), smulders(), quadraticLinear(), inverseLambda(), delCastillo(), vanAerde(), piecewise(),
	}
	for i := range shapes {
		s := &shapes[i]
		for _, w := range s.ways {
			s.Combinations = append(s.Combinations, w.keys.String())
		}
	}
	return shapes
}

// New builds the diagram of a named shape from parameters per lane in metres, seconds and vehicles. It returns an
// error, which says what is possible, for an unknown name, for too few parameters and for parameters that
// contradict each other by more than 0.1 %.
func New(shape string, p Params) (Diagram, error) {
	s, err := find(shape)
	if err != nil {
		return nil, err
	}
	d, err := s.build(p)
	if err != nil {
		return nil, fmt.Errorf("shape `%s`: %w", shape, err)
	}
	return d, nil
}

func (s *Shape) build(p Params) (Diagram, error) {
	if err := p.check(); err != nil {
		return nil, err
	}
	given := p.given()
	if extra := given & s.lacks; extra != none {
		return nil, fmt.Errorf("it has no %s: leave it out and give %s", strings.ReplaceAll(extra.String(), ", ", " or "), s.choices())
	}
	for _, w := range s.ways {
		if given&w.keys != w.keys {
			continue
		}
		full, err := w.complete(p.only(w.keys))
		if err != nil {
			return nil, err
		}
		d, all, err := s.make(full)
		if err != nil {
			return nil, err
		}
		return d, s.agree(p, all, given&^w.keys, w.keys)
	}
	if given == none {
		return nil, fmt.Errorf("nothing is given: give %s", s.choices())
	}
	return nil, fmt.Errorf("%s alone cannot determine it: give %s", given, s.choices())
}

// agree compares the parameters of p in rest, which the diagram was not built from, with those it has.
func (s *Shape) agree(p, all Params, rest, from keys) error {
	for key := freeSpeed; key < points; key <<= 1 {
		if rest&key == 0 {
			continue
		}
		x, want := *p.value(key), *all.value(key)
		if math.Abs(x-want) > tolerance*want {
			return fmt.Errorf("%s is %s but follows as %s from %s: give only %s", key, say(key, x), say(key, want), from, s.choices())
		}
	}
	return nil
}

// choices joins the combinations for a message.
func (s *Shape) choices() string {
	if len(s.Combinations) == 1 {
		return s.Combinations[0]
	}
	return "one of (" + strings.Join(s.Combinations, ") (") + ")"
}

// find looks up a shape, or says which there are.
func find(name string) (*Shape, error) {
	shapes := Shapes()
	var known []string
	nearest, least := "", math.MaxInt
	for i := range shapes {
		if shapes[i].Name == name {
			return &shapes[i], nil
		}
		known = append(known, shapes[i].Name)
		if n := distance(name, shapes[i].Name); n < least {
			nearest, least = shapes[i].Name, n
		}
	}
	return nil, fmt.Errorf("unknown shape `%s`: did you mean `%s`? the shapes are %s", name, nearest, strings.Join(known, ", "))
}

// distance is the number of letters to insert, delete or replace between two words (Levenshtein 1966).
func distance(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			cost := diagonal
			if a[i] != b[j] {
				cost++
			}
			diagonal = row[j+1]
			row[j+1] = min(cost, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}
