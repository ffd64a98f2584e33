package unit

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// System is the set of units in which people read results. The zero value is Metric.
type System int

// The unit systems.
const (
	Metric System = iota // km, m, km/h, veh/km
	US                   // mi, ft, mph, veh/mi
)

// ParseSystem reads "metric" or "us".
func ParseSystem(s string) (System, error) {
	for _, system := range []System{Metric, US} {
		if s == system.String() {
			return system, nil
		}
	}
	return Metric, fmt.Errorf("`%s` is no unit system: use metric or us", s)
}

// String is "metric" or "us".
func (s System) String() string {
	if s == US {
		return "us"
	}
	return "metric"
}

// Length writes x metres: "3.2 km" or, below one kilometre, "850 m"; "2.0 mi" or, below one mile, "2,790 ft".
func (s System) Length(x float64) string {
	if s == US {
		if math.Abs(x) >= Mile {
			return fixed(x/Mile, 1) + " mi"
		}
		feet := math.Round(x / Foot)
		if math.Abs(feet) >= 1000 {
			feet = math.Round(feet/10) * 10
		}
		return fixed(feet, 0) + " ft"
	}
	if math.Abs(math.Round(x)) >= Kilometre {
		return fixed(x/Kilometre, 1) + " km"
	}
	return fixed(x, 0) + " m"
}

// Speed writes x m/s, whole from 20 on: "100 km/h", "62 mph", "18.5 km/h".
func (s System) Speed(x float64) string {
	if s == US {
		return coarse(x/MilePerHour) + " mph"
	}
	return coarse(x/KilometrePerHour) + " km/h"
}

// Density writes x veh/m, of one lane or all as the caller has it: "24.1 veh/km", "38.8 veh/mi".
func (s System) Density(x float64) string {
	if s == US {
		return fixed(x/VehPerMile, 1) + " veh/mi"
	}
	return fixed(x/VehPerKilometre, 1) + " veh/km"
}

// Flow writes x veh/s, of one lane or all as the caller has it: "4,120 veh/h" in both systems.
func (s System) Flow(x float64) string { return fixed(x/VehPerHour, 0) + " veh/h" }

// coarse writes one decimal below 20 and none above.
func coarse(x float64) string {
	if math.Abs(x) < 19.95 {
		return fixed(x, 1)
	}
	return fixed(x, 0)
}

// fixed writes x with a number of decimals and a comma between thousands.
func fixed(x float64, decimals int) string {
	if math.IsInf(x, 0) || math.IsNaN(x) {
		return strconv.FormatFloat(x, 'f', 0, 64)
	}
	text := strconv.FormatFloat(math.Abs(x), 'f', decimals, 64)
	whole := len(text)
	if decimals > 0 {
		whole -= decimals + 1
	}
	negative := x < 0 && strings.Trim(text, "0.") != "" // not "-0"
	for i := whole - 3; i > 0; i -= 3 {
		text = text[:i] + "," + text[i:]
	}
	if negative {
		return "-" + text
	}
	return text
}
