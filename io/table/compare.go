package table

import (
	"bytes"
	"encoding/json"
	"math"
	"os"
	"path/filepath"

	"example.org/tailback/ctm/study"
	"example.org/tailback/network"
)

// WriteCompare writes compare.csv and compare.json into a folder that exists.
func WriteCompare(dir string, list []*study.Comparison, n *network.Network, meta Meta) error {
	s, err := newSheet(dir, "compare.csv", "alternative,measure,base,value,change,change_percent")
	if err != nil {
		return err
	}
	for _, c := range list {
		for i := range c.Changes {
			row := &c.Changes[i]
			s.text(c.Name)
			s.text(row.Measure)
			s.number(row.Base, 4)
			s.number(row.Value, 4)
			s.number(row.Diff(), 4)
			s.number(row.Percent(), 3)
			s.end()
		}
	}
	if err := s.close(); err != nil {
		return err
	}
	b, err := CompareJSON(list, n, meta)
	if err != nil {
		return err
	}
	return os.WriteFile(filepath.Join(dir, "compare.json"), b, 0o666)
}

type comparison struct {
	Study        string                `json:"study"`
	Version      string                `json:"program_version"`
	Inputs       []Input               `json:"inputs"`
	Caution      string                `json:"caution"`
	Alternatives []comparedAlternative `json:"alternatives"`
}

type comparedAlternative struct {
	Name     string            `json:"alternative"`
	Changes  []comparedMeasure `json:"changes"`
	Vehicles vehicles          `json:"vehicles"`
	Warnings []string          `json:"warnings"`
}

type comparedMeasure struct {
	Measure string   `json:"measure"`
	Base    *float64 `json:"base"`
	Value   *float64 `json:"value"`
	Change  *float64 `json:"change"`
	Percent *float64 `json:"change_percent"`
	Verdict string   `json:"verdict,omitempty"`
}

type vehicles struct {
	Base       float64 `json:"base_veh"`
	Travelled  float64 `json:"travelled_veh"`
	Suppressed float64 `json:"suppressed_veh"`
	Added      float64 `json:"added_veh"`
	Moved      []moved `json:"moved"`
}

type moved struct {
	From     string  `json:"from"`
	To       string  `json:"to"`
	Vehicles float64 `json:"veh"`
}

// CompareJSON is the content of compare.json. A value that does not exist is null.
func CompareJSON(list []*study.Comparison, n *network.Network, meta Meta) ([]byte, error) {
	out := comparison{Study: meta.Study, Version: meta.Version, Inputs: meta.Inputs, Caution: Caution, Alternatives: []comparedAlternative{}}
	for _, c := range list {
		a := comparedAlternative{
			Name: c.Name, Warnings: append([]string{}, c.Warnings...),
			Vehicles: vehicles{Base: c.Moved.Base, Travelled: c.Moved.Travelled, Suppressed: c.Moved.Suppressed, Added: c.Moved.Added, Moved: []moved{}},
		}
		for _, m := range c.Moved.Moves {
			a.Vehicles.Moved = append(a.Vehicles.Moved, moved{n.Links[m.From].Name, n.Links[m.To].Name, m.Vehicles})
		}
		for i := range c.Changes {
			row := &c.Changes[i]
			a.Changes = append(a.Changes, comparedMeasure{row.Measure, finite(row.Base), finite(row.Value), finite(row.Diff()), finite(row.Percent()), row.Verdict()})
		}
		out.Alternatives = append(out.Alternatives, a)
	}
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	err := e.Encode(out)
	return b.Bytes(), err
}

// finite is x, or nil where it does not exist.
func finite(x float64) *float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return nil
	}
	return &x
}
