package junction

import (
	"math"
	"testing"
)

// near fails if got and want differ by more than tol, relative to the largest wanted value.
func near(t *testing.T, what string, got, want []float64, tol float64) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%s: %d values, want %d", what, len(got), len(want))
	}
	scale := 0.0
	for _, w := range want {
		scale = max(scale, math.Abs(w))
	}
	for i := range want {
		if !(math.Abs(got[i]-want[i]) <= tol*max(scale, 1e-300)) && got[i] != want[i] {
			t.Errorf("%s[%d] = %.10g, want %.10g", what, i, got[i], want[i])
		}
	}
}

// problem makes a problem from the flow that each movement sends.
func problem(movements [][]float64, priority, receiving []float64) *Problem {
	p := &Problem{Receiving: receiving, Priority: priority}
	for _, row := range movements {
		sum := 0.0
		for _, x := range row {
			sum += x
		}
		p.Sending = append(p.Sending, sum)
		for _, x := range row {
			p.Turn = append(p.Turn, x/max(sum, 1e-300))
		}
	}
	return p
}

func solved(m Model, p *Problem) (in, out []float64) {
	in, out = make([]float64, len(p.Sending)), make([]float64, len(p.Receiving))
	m.Flows(in, out, p)
	return in, out
}

func TestMergeValues(t *testing.T) {
	// Daganzo 1995 (CTM II), formula q1 = med{S1, R-S2, p1 R}, from memory; the four values worked out by hand from
	// it, R = 4000.
	for _, c := range []struct{ s1, s2, p1, q1, q2 float64 }{
		{3600, 900, .8, 3200, 800},
		{3600, 500, .8, 3500, 500},
		{2000, 2500, .8, 2000, 2000},
		{4000, 1500, .75, 3000, 1000},
		{1000, 2000, .5, 1000, 2000}, // S1 + S2 <= R: both pass
	} {
		p := &Problem{
			Sending: []float64{c.s1, c.s2}, Receiving: []float64{4000},
			Priority: []float64{c.p1, 1 - c.p1}, Turn: []float64{1, 1},
		}
		for _, m := range []Model{&Oriented{}, &Movement{}} {
			in, out := solved(m, p)
			near(t, "in", in, []float64{c.q1, c.q2}, 1e-12)
			near(t, "out", out, []float64{c.q1 + c.q2}, 1e-12)
		}
	}
}

func TestDivergeValues(t *testing.T) {
	p := &Problem{
		Sending: []float64{4000}, Receiving: []float64{4000, 600},
		Priority: []float64{1}, Turn: []float64{.75, .25},
	}
	// Daganzo 1995 (CTM II), first-in, first-out diverge: q = min{S, min R_j/f_j} = 600/.25.
	in, out := solved(&Oriented{}, p)
	near(t, "oriented in", in, []float64{2400}, 1e-12)
	near(t, "oriented out", out, []float64{1800, 600}, 1e-12)
	// No first in, first out: 3000 + 600. The limit without restriction intervals of the partial-FIFO node of Wright
	// et al. 2017, by hand.
	in, out = solved(&Movement{}, p)
	near(t, "movement in", in, []float64{3600}, 1e-12)
	near(t, "movement out", out, []float64{3000, 600}, 1e-12)
}

func TestOrientedFourByFour(t *testing.T) {
	// Inputs: Tampere et al. 2011, the worked example, from memory. Flows: an independent calculation by the paper's
	// algorithm, not this package (passes: approach 1 whole; 2 and 4 held at .684834; 3 whole).
	p := problem([][]float64{
		{0, 50, 150, 300},
		{100, 0, 300, 1600},
		{100, 100, 0, 600},
		{100, 800, 800, 0},
	}, []float64{1000, 2000, 1000, 2000}, []float64{1000, 2000, 1000, 2000})
	var o Oriented
	in, out := solved(&o, p)
	near(t, "in", in, []float64{500, 1369.668246, 800, 1369.668246}, 1e-9)
	near(t, "out", out, []float64{249.052133, 794.549763, 1000, 1995.734597}, 1e-9)
	q := make([]float64, 16)
	o.Movements(q, p)
	near(t, "movements", q, []float64{
		0, 50, 150, 300,
		68.483412, 0, 205.450237, 1095.734597,
		100, 100, 0, 600,
		80.568720, 644.549763, 644.549763, 0,
	}, 1e-9)
}

func TestOrientedTwoByTwo(t *testing.T) {
	// Independent calculation by the algorithm of Tampere et al. 2011, not this package.
	for _, c := range []struct {
		send      [][]float64
		receiving []float64
		want      []float64
	}{
		{
			[][]float64{{1200, 400}, {600, 300}},
			[]float64{1500, 1000},
			[]float64{978.260870, 326.086957, 521.739130, 260.869565},
		},
		{
			[][]float64{{1500, 500}, {600, 300}},
			[]float64{1500, 400},
			[]float64{666.666667, 222.222222, 355.555556, 177.777778},
		},
	} {
		q := make([]float64, 4)
		new(Oriented).Movements(q, problem(c.send, []float64{2000, 1200}, c.receiving))
		near(t, "movements", q, c.want, 1e-9)
	}
}

func TestMovementTwoByTwo(t *testing.T) {
	// By hand. Way out 1: 1200 + 600 want 1500; oriented priorities 2000*.75 = 1500 and 1200*(2/3) = 800; shares of
	// 1500: 978.2609 and 521.7391. Way out 2: 400 + 300 <= 1000, nobody waits for way out 1.
	p := problem([][]float64{{1200, 400}, {600, 300}}, []float64{2000, 1200}, []float64{1500, 1000})
	q := make([]float64, 4)
	var v Movement
	v.Movements(q, p)
	near(t, "movements", q, []float64{1500. * 1500 / 2300, 400, 1500. * 800 / 2300, 300}, 1e-12)
	in, out := solved(&v, p)
	near(t, "in", in, []float64{1500.*1500/2300 + 400, 1500.*800/2300 + 300}, 1e-12)
	near(t, "out", out, []float64{1500, 700}, 1e-12)
}

func TestMovementLeftover(t *testing.T) {
	// By hand: equal priorities, 100 + 900 + 900 want 1000: the first passes whole and the others share what it leaves.
	// Turning fractions to way out 1 are 100/150, 900/950 and 900/950, so these priorities make f_i1 P_i = 1 for each.
	p := problem([][]float64{{100, 50}, {900, 50}, {900, 50}}, []float64{150. / 100, 950. / 900, 950. / 900}, []float64{1000, 1000})
	q := make([]float64, 6)
	new(Movement).Movements(q, p)
	near(t, "movements", q, []float64{100, 50, 450, 50, 450, 50}, 1e-12)
}

func TestEdges(t *testing.T) {
	inf := math.Inf(1)
	half := []float64{.5, .5, .5, .5}
	for _, c := range []struct {
		name    string
		p       Problem
		in, out []float64 // oriented, by hand
	}{
		{"nothing sent, empty rows", Problem{[]float64{0, 0}, []float64{5, 5}, []float64{1, 1}, []float64{0, 0, 0, 0}}, []float64{0, 0}, []float64{0, 0}},
		{"one blocked way out", Problem{[]float64{4, 4}, []float64{0, 9}, []float64{1, 1}, []float64{.5, .5, 0, 1}}, []float64{0, 4}, []float64{0, 4}},
		{"receiving below zero", Problem{[]float64{4, 4}, []float64{-1, 9}, []float64{1, 1}, []float64{.5, .5, 0, 1}}, []float64{0, 4}, []float64{0, 4}},
		{"receives everything", Problem{[]float64{4, 4}, []float64{inf, inf}, []float64{1, 1}, half}, []float64{4, 4}, []float64{4, 4}},
		{"endless queue", Problem{[]float64{inf, 1}, []float64{4, inf}, []float64{1, 1}, half}, []float64{7, 1}, []float64{4, 4}},
		{"endless queues", Problem{[]float64{inf, inf}, []float64{3, 9}, []float64{1, 2}, half}, []float64{2, 4}, []float64{3, 3}},
		{"ties of ways out", Problem{[]float64{6, 6}, []float64{2, 2}, []float64{1, 1}, half}, []float64{2, 2}, []float64{2, 2}},
		{"ties of one approach each", Problem{[]float64{6, 6}, []float64{2, 2}, []float64{1, 1}, []float64{1, 0, 0, 1}}, []float64{2, 2}, []float64{2, 2}},
		{"sends just what passes", Problem{[]float64{2, 2}, []float64{2, 2}, []float64{1, 1}, half}, []float64{2, 2}, []float64{2, 2}},
		{"no priority gives way", Problem{[]float64{3, 3}, []float64{2, 2}, []float64{1, 0}, half}, []float64{3, 1}, []float64{2, 2}},
		{"no priority, all room", Problem{[]float64{0, 3}, []float64{2, 2}, []float64{1, 0}, half}, []float64{0, 3}, []float64{1.5, 1.5}},
		{"merge with no priority", Problem{[]float64{3, 3}, []float64{2}, []float64{0, 0}, []float64{1, 1}}, []float64{1, 1}, []float64{2}},
		{"diverge with an unused blocked way out", Problem{[]float64{3}, []float64{0, 9}, []float64{1}, []float64{0, 1}}, []float64{3}, []float64{0, 3}},
		{"diverge with an empty row", Problem{[]float64{3}, []float64{5, 9}, []float64{1}, []float64{0, 0}}, []float64{0}, []float64{0, 0}},
	} {
		t.Run(c.name, func(t *testing.T) {
			in, out := solved(&Oriented{}, &c.p)
			near(t, "in", in, c.in, 1e-12)
			near(t, "out", out, c.out, 1e-12)
			for _, x := range append(solvedAll(&Movement{}, &c.p), in...) {
				if math.IsNaN(x) || x < 0 {
					t.Errorf("flow %v, want a number >= 0", x)
				}
			}
		})
	}
}

func solvedAll(m Model, p *Problem) []float64 {
	in, out := solved(m, p)
	return append(in, out...)
}

func TestLengths(t *testing.T) {
	good := Problem{[]float64{1, 1}, []float64{1, 1}, []float64{1, 1}, []float64{1, 0, 0, 1}}
	short := good
	short.Turn = short.Turn[:3]
	few := good
	few.Priority = few.Priority[:1]
	for name, f := range map[string]func(){
		"turn":               func() { solved(&Oriented{}, &short) },
		"priority":           func() { solved(&Movement{}, &few) },
		"oriented movements": func() { new(Oriented).Movements(make([]float64, 3), &good) },
		"movement movements": func() { new(Movement).Movements(make([]float64, 3), &good) },
		"merge":              func() { Merge(make([]float64, 2), []float64{1, 1}, []float64{1}, 1) },
		"diverge":            func() { Diverge(make([]float64, 2), 1, []float64{1}, []float64{.5, .5}) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s of the wrong length: no panic", name)
				}
			}()
			f()
		}()
	}
}
