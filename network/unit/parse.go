package unit

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Parse reads a quantity with its unit, such as "65 mph" or "12 %", and returns it in metres, seconds and vehicles,
// per lane where the kind is. The space before the unit may be missing. A share may be a plain fraction; every other
// kind needs a unit. It returns an error for anything else, and for a value that is negative or not finite.
func Parse(kind Kind, s string) (float64, error) {
	text := strings.TrimSpace(s)
	end := strings.IndexFunc(text, func(r rune) bool { return !strings.ContainsRune("0123456789.+-eE", r) })
	if end < 0 {
		end = len(text)
	}
	name := strings.TrimSpace(text[end:])
	x, err := strconv.ParseFloat(text[:end], 64)
	if err != nil {
		// The number may be a word (NaN, Inf) or out of range.
		first, _, _ := strings.Cut(text, " ")
		if y, e := strconv.ParseFloat(first, 64); e == nil || math.IsInf(y, 0) {
			return 0, fmt.Errorf("`%s` is not finite: give a number with %s", s, kind.units())
		}
		return 0, kind.unknown(s)
	}
	for _, u := range kinds[kind].units {
		if u.name == name {
			return u.convert(x, s)
		}
	}
	if name == "" {
		return 0, fmt.Errorf("`%s` has no unit: use %s", s, kind.units())
	}
	return 0, kind.unknown(s)
}

// FromNumber converts a bare number in the default unit of its kind, which a caller may accept where a file holds
// numbers: km/h, m, veh/h, veh/h/lane, veh/km/lane or a fraction. A duration has no default unit and is always an
// error, as is a value that is negative or not finite.
func FromNumber(kind Kind, x float64) (float64, error) {
	text := strconv.FormatFloat(x, 'g', -1, 64)
	if !kinds[kind].bare {
		return 0, fmt.Errorf("`%s` has no unit: use %s", text, kind.units())
	}
	return kinds[kind].units[0].convert(x, text)
}

// convert brings x into metres, seconds and vehicles.
func (u scale) convert(x float64, text string) (float64, error) {
	y := x * u.num / u.den
	switch {
	case x < 0:
		return 0, fmt.Errorf("`%s` is negative: it must be 0 or more", text)
	case math.IsNaN(y) || math.IsInf(y, 0):
		return 0, fmt.Errorf("`%s` is not finite: give a smaller number", text)
	}
	return y, nil
}

// unknown is the error for text that is no quantity of the kind.
func (k Kind) unknown(s string) error {
	return fmt.Errorf("`%s` is no %s: use %s", s, k, k.units())
}

// units lists the accepted units for a message, as "km/h, mph or m/s".
func (k Kind) units() string {
	if k == Share {
		return "a fraction such as 0.12, or %"
	}
	var list []string
	for _, u := range kinds[k].units {
		list = append(list, u.name)
	}
	if len(list) == 1 {
		return list[0]
	}
	last := len(list) - 1
	return strings.Join(list[:last], ", ") + " or " + list[last]
}
