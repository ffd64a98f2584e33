package table

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"

	"example.org/tailback/ctm/study"
	"example.org/tailback/network/unit"
)

// Meta is what a summary tells beside the run itself.
type Meta struct {
	Study       string // title
	Alternative string // base or an alternative's name
	Version     string // of the program
	Reviewer    string // empty: results are preliminary
	Inputs      []Input
}

// Input is a file that was read.
type Input struct {
	Name   string `json:"name"`
	SHA256 string `json:"sha256"`
}

// summary is the content of summary.json.
type summary struct {
	Study        string   `json:"study"`
	Alternative  string   `json:"alternative"`
	Status       string   `json:"status"`
	Version      string   `json:"program_version"`
	Inputs       []Input  `json:"inputs"`
	Step         float64  `json:"step_s"`
	Cells        int      `json:"cells"`
	Steps        int      `json:"steps"`
	MaxCourant   float64  `json:"max_courant"`
	Conservation float64  `json:"conservation_error_veh"`
	Wall         float64  `json:"wall_s"`
	Solve        float64  `json:"solve_s"`
	Queued       string   `json:"queued_means"`
	Warnings     []string `json:"warnings"`
	Totals       totals   `json:"totals"`
	Caution      string   `json:"caution"`
}

type totals struct {
	Entered      float64 `json:"entered_veh"`
	Left         float64 `json:"left_veh"`
	Inside       float64 `json:"inside_veh"`
	Waiting      float64 `json:"waiting_veh"`
	TravelHours  float64 `json:"travel_veh_hours"`
	TravelKm     float64 `json:"travel_veh_km"`
	Delay        float64 `json:"delay_veh_hours"`
	WaitingHours float64 `json:"waiting_veh_hours"`
	MaxQueue     float64 `json:"max_queue_m"`
	MaxQueueLink string  `json:"max_queue_link"`
	MaxQueueTime string  `json:"max_queue_time"`
}

// Caution goes with every result.
const Caution = "A screening estimate. The end of a queue is where crashes happen. Sign placement, permitted hours and traffic control follow the local code and a licensed engineer's judgement."

// Summary is the content of summary.json, indented JSON that ends with a line feed.
func Summary(r *study.Result, meta Meta) ([]byte, error) {
	t := &r.Totals
	s := summary{
		Study: meta.Study, Alternative: meta.Alternative, Status: "PRELIMINARY", Version: meta.Version, Inputs: meta.Inputs,
		Step: r.Grid.Step, Cells: r.Grid.Cells, Steps: r.Grid.Steps, MaxCourant: r.Grid.MaxCourant,
		Conservation: r.Lost, Wall: r.Wall, Solve: r.Solve, Queued: r.Criterion.String(), Warnings: r.Warnings, Caution: Caution,
		Totals: totals{
			Entered: t.Entered, Left: t.Left, Inside: t.Inside, Waiting: t.Waiting,
			TravelHours: t.Seconds / perHour, TravelKm: t.Metres / perKm, Delay: t.Delay / perHour,
			WaitingHours: t.WaitingSeconds / perHour, MaxQueue: t.MaxQueue,
		},
	}
	if meta.Reviewer != "" {
		s.Status = "reviewed by " + meta.Reviewer
	}
	if t.MaxQueue > 0 {
		s.Totals.MaxQueueLink, s.Totals.MaxQueueTime = linkName(r, t.MaxQueueLink), unit.Clock(t.MaxQueueTime)
	}
	if s.Warnings == nil {
		s.Warnings = []string{}
	}
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	err := e.Encode(s)
	return b.Bytes(), err
}

func writeSummary(dir string, r *study.Result, meta Meta) error {
	b, err := Summary(r, meta)
	if err != nil {
		return err
	}
	return os.WriteFile(filepath.Join(dir, "summary.json"), b, 0o666)
}
