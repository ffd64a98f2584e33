package table

import "example.org/tailback/ctm/study"

// Units of the columns of verdicts.csv by the SI unit of a verdict, with the factor to multiply by and the decimals.
func verdictUnit(si string) (unit string, factor float64, decimals int) {
	switch si {
	case "s":
		return "min", 1.0 / 60, 3
	case "veh/s/lane":
		return "veh/h/lane", perHour, 1
	case "m":
		return "m", 1, 1
	}
	return si, 1, 2
}

// WriteVerdicts writes verdicts.csv: the verdicts of each named run, one row each.
func WriteVerdicts(dir string, names []string, verdicts [][]study.Verdict) error {
	s, err := newSheet(dir, "verdicts.csv", "alternative,limit,kind,value,allowed,margin,unit,kept,first_broken")
	if err != nil {
		return err
	}
	for i, name := range names {
		for k := range verdicts[i] {
			v := &verdicts[i][k]
			unit, factor, decimals := verdictUnit(v.Unit)
			s.text(name)
			s.text(v.Limit.Name)
			s.text(v.Limit.Kind)
			s.number(v.Value*factor, decimals)
			s.number(v.Allowed*factor, decimals)
			s.number(v.Margin*factor, decimals)
			s.text(unit)
			s.text(yes(v.Kept))
			s.clock(v.FirstBroken)
			s.end()
		}
	}
	return s.close()
}

// yes writes a truth as a field.
func yes(b bool) string {
	if b {
		return "yes"
	}
	return "no"
}
