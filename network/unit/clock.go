package unit

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// ParseClock reads a clock time "HH:MM" or "HH:MM:SS" as seconds since midnight. Hours run past 24 for the following
// days: "29:00" is 05:00 of day 2.
func ParseClock(s string) (float64, error) {
	fields := strings.Split(strings.TrimSpace(s), ":")
	if len(fields) < 2 || len(fields) > 3 {
		return 0, notClock(s)
	}
	total := 0.0
	for i, f := range fields {
		n, err := strconv.ParseUint(f, 10, 16)
		switch {
		case err != nil || i > 0 && len(f) != 2 || len(f) > 3:
			return 0, notClock(s)
		case i > 0 && n > 59:
			return 0, fmt.Errorf("`%s` is no clock time: minutes and seconds run to 59", s)
		}
		total = 60*total + float64(n)
	}
	if len(fields) == 2 {
		total *= 60
	}
	return total, nil
}

func notClock(s string) error {
	return fmt.Errorf("`%s` is no clock time: use HH:MM or HH:MM:SS, with hours past 24 for the following day", s)
}

// Clock writes seconds since midnight as "HH:MM:SS", to the nearest second, with hours running past 24. A value that
// is not finite gives "--:--:--".
func Clock(seconds float64) string {
	if math.IsNaN(seconds) || math.IsInf(seconds, 0) {
		return "--:--:--"
	}
	sign := ""
	n := int64(math.Round(seconds))
	if n < 0 {
		sign, n = "-", -n
	}
	return fmt.Sprintf("%s%02d:%02d:%02d", sign, n/3600, n/60%60, n%60)
}
