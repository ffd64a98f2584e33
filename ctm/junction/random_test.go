package junction

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// tol is the tolerance of the properties, relative to the largest flow: a solution is some tens of sums and
// quotients, each rounded within 1.1e-16.
const tol = 1e-11

// anyProblem draws a node of up to rows x cols with flows of 0 to 10, whole ones often, so that ties happen.
func anyProblem(t *rapid.T, rows, cols int) *Problem {
	n, m := rapid.IntRange(1, rows).Draw(t, "n"), rapid.IntRange(1, cols).Draw(t, "m")
	flow := rapid.OneOf(
		rapid.Map(rapid.IntRange(0, 4), func(i int) float64 { return float64(i) }),
		rapid.Float64Range(0, 10),
	)
	priority := rapid.OneOf(rapid.Just(1.0), rapid.Float64Range(.1, 10))
	p := &Problem{
		Sending:   rapid.SliceOfN(flow, n, n).Draw(t, "sending"),
		Receiving: rapid.SliceOfN(flow, m, m).Draw(t, "receiving"),
		Priority:  rapid.SliceOfN(priority, n, n).Draw(t, "priority"),
	}
	for range n {
		row := rapid.SliceOfN(rapid.IntRange(0, 4), m, m).Draw(t, "turn")
		sum := 0
		for _, x := range row {
			sum += x
		}
		if sum == 0 {
			row[0], sum = 1, 1
		}
		for _, x := range row {
			p.Turn = append(p.Turn, float64(x)/float64(sum))
		}
	}
	return p
}

func same(t *rapid.T, what string, got, want []float64) {
	for i := range want {
		if math.Abs(got[i]-want[i]) > tol*max(1, math.Abs(want[i])) {
			t.Fatalf("%s = %v, want %v", what, got, want)
		}
	}
}

func TestBounds(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := anyProblem(t, 6, 6)
		for _, m := range []Model{&Oriented{}, &Movement{}} {
			in, out := solved(m, p)
			moved := 0.0
			for i, q := range in {
				if !(q >= 0 && q <= p.Sending[i]) {
					t.Fatalf("%T: approach %d passes %v of %v", m, i, q, p.Sending[i])
				}
				moved += q
			}
			for j, q := range out {
				if !(q >= 0 && q <= p.Receiving[j]*(1+1e-12)) {
					t.Fatalf("%T: way out %d takes %v of %v", m, j, q, p.Receiving[j])
				}
				moved -= q
			}
			if math.Abs(moved) > tol {
				t.Fatalf("%T: %v more leave approaches than enter ways out", m, moved)
			}
		}
	})
}

// TestOrientedConditions checks what defines the model, not its algorithm: each approach sends everything or uses a
// full way out where nobody passes more per priority (the interaction rule of Tampere et al. 2011).
func TestOrientedConditions(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := anyProblem(t, 6, 6)
		in, out := solved(&Oriented{}, p)
		m := len(out)
		for i, q := range in {
			if q >= p.Sending[i]-tol {
				continue
			}
			held := false
			for j := range out {
				if p.Turn[i*m+j] <= 0 || out[j] < p.Receiving[j]-tol {
					continue
				}
				most := true
				for k := range in {
					if p.Turn[k*m+j] > 0 && in[k]/p.Priority[k] > q/p.Priority[i]+10*tol {
						most = false
					}
				}
				held = held || most
			}
			if !held {
				t.Fatalf("approach %d passes %v of %v with no cause: in %v out %v", i, q, p.Sending[i], in, out)
			}
		}
	})
}

func TestOrientedFirstInFirstOut(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := anyProblem(t, 6, 6)
		var o Oriented
		in, out := solved(&o, p)
		q := make([]float64, len(p.Turn))
		o.Movements(q, p)
		sum := make([]float64, len(out))
		for i := range in {
			for j := range out {
				x := q[i*len(out)+j]
				sum[j] += x
				if math.Abs(x-p.Turn[i*len(out)+j]*in[i]) > tol {
					t.Fatalf("movement %d to %d passes %v, want share %v of %v", i, j, x, p.Turn[i*len(out)+j], in[i])
				}
			}
		}
		same(t, "sums of movements", sum, out)
	})
}

// TestOrientedInvariance: Lebacque & Khoshyaran 2005. An approach that is held back may have any longer queue, a way
// out that is not full any more room.
func TestOrientedInvariance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := anyProblem(t, 6, 6)
		in, out := solved(&Oriented{}, p)
		more := *p
		more.Sending = append([]float64(nil), p.Sending...)
		more.Receiving = append([]float64(nil), p.Receiving...)
		grow := rapid.OneOf(rapid.Float64Range(1, 10), rapid.Just(math.Inf(1)))
		for i, q := range in {
			if q < p.Sending[i]-tol {
				more.Sending[i] *= grow.Draw(t, "sending grows")
			}
		}
		for j, q := range out {
			if q < p.Receiving[j]-tol {
				more.Receiving[j] *= grow.Draw(t, "receiving grows")
			}
		}
		in2, out2 := solved(&Oriented{}, &more)
		same(t, "in", in2, in)
		same(t, "out", out2, out)
	})
}

// TestMovementConditions: each movement sends everything or its way out is full and nobody passes more of it per
// oriented priority; invariance in the receiving flows follows from it and is checked too.
func TestMovementConditions(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := anyProblem(t, 6, 6)
		var v Movement
		in, out := solved(&v, p)
		m := len(out)
		q := make([]float64, len(p.Turn))
		v.Movements(q, p)
		theta := func(i, j int) float64 { return q[i*m+j] / (p.Turn[i*m+j] * p.Priority[i]) }
		more := *p
		more.Receiving = append([]float64(nil), p.Receiving...)
		for j := range out {
			if out[j] < p.Receiving[j]-tol {
				more.Receiving[j] = math.Inf(1)
			}
			for i := range in {
				if q[i*m+j] >= p.Turn[i*m+j]*p.Sending[i]-tol {
					continue
				}
				if out[j] < p.Receiving[j]-tol {
					t.Fatalf("movement %d to %d is held back but the way out has room", i, j)
				}
				for k := range in {
					if p.Turn[k*m+j] > 0 && theta(k, j) > theta(i, j)+100*tol {
						t.Fatalf("movement %d to %d passes %v per priority, %d passes %v", i, j, theta(i, j), k, theta(k, j))
					}
				}
			}
		}
		in2, out2 := solved(&v, &more)
		same(t, "in", in2, in)
		same(t, "out", out2, out)
	})
}

// TestMovementPassesAtLeastOriented: nobody is held back by a way out that is not theirs, so every approach of a
// diverge passes at least what first in, first out lets it.
func TestMovementPassesAtLeastOriented(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := anyProblem(t, 1, 6)
		fifo, _ := solved(&Oriented{}, p)
		free, _ := solved(&Movement{}, p)
		if free[0] < fifo[0]-tol {
			t.Fatalf("by movement %v, first in first out %v", free[0], fifo[0])
		}
	})
}

func TestClosedFormsAgree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rows, cols := 6, 1
		if rapid.Bool().Draw(t, "diverge") {
			rows, cols = 1, 6
		}
		p := anyProblem(t, rows, cols)
		in, out := solved(&Oriented{}, p)
		in2, out2 := make([]float64, len(in)), make([]float64, len(out))
		new(Oriented).solve(in2, p)
		p.rows(nil, out2, in2)
		for i := range in {
			if math.Abs(in[i]-in2[i]) > 1e-12*max(1, in[i]) {
				t.Fatalf("in %v, general algorithm %v", in, in2)
			}
		}
		for j := range out {
			if math.Abs(out[j]-out2[j]) > 1e-12*max(1, out[j]) {
				t.Fatalf("out %v, general algorithm %v", out, out2)
			}
		}
	})
}

// TestMergeMedian holds two approaches against the formula of Daganzo 1995 (CTM II), another form of the same.
func TestMergeMedian(t *testing.T) {
	median := func(a, b, c float64) float64 { return max(min(a, b), min(max(a, b), c)) }
	rapid.Check(t, func(t *rapid.T) {
		p := anyProblem(t, 2, 1)
		if len(p.Sending) < 2 {
			return
		}
		s1, s2, r := p.Sending[0], p.Sending[1], p.Receiving[0]
		share := p.Priority[0] / (p.Priority[0] + p.Priority[1])
		want := []float64{s1, s2}
		if s1+s2 > r {
			want = []float64{median(s1, r-s2, share*r), median(s2, r-s1, (1-share)*r)}
		}
		in, _ := solved(&Oriented{}, p)
		same(t, "in", in, want)
	})
}

// TestMonotone: more room never lets less through, at merges and diverges and by movement. (Not so first in, first
// out in general: room for one way out lets vehicles in that take the room of another.)
func TestMonotone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		size := rapid.SampledFrom([][2]int{{6, 1}, {1, 6}, {6, 6}}).Draw(t, "size")
		p := anyProblem(t, size[0], size[1])
		more := *p
		more.Receiving = nil
		for _, r := range p.Receiving {
			more.Receiving = append(more.Receiving, r+rapid.Float64Range(0, 3).Draw(t, "room"))
		}
		models := []Model{&Movement{}}
		if len(p.Sending) == 1 || len(p.Receiving) == 1 {
			models = append(models, &Oriented{})
		}
		for _, m := range models {
			in, _ := solved(m, p)
			in2, _ := solved(m, &more)
			for i := range in {
				if in2[i] < in[i]-tol {
					t.Fatalf("%T: approach %d passes %v, with more room %v", m, i, in[i], in2[i])
				}
			}
		}
	})
}

func TestOrder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := anyProblem(t, 6, 6)
		n, m := len(p.Sending), len(p.Receiving)
		r := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		rows, cols := r.Perm(n), r.Perm(m)
		turned := &Problem{Sending: make([]float64, n), Priority: make([]float64, n), Receiving: make([]float64, m), Turn: make([]float64, n*m)}
		for i, k := range rows {
			turned.Sending[i], turned.Priority[i] = p.Sending[k], p.Priority[k]
			for j, l := range cols {
				turned.Turn[i*m+j] = p.Turn[k*m+l]
			}
		}
		for j, l := range cols {
			turned.Receiving[j] = p.Receiving[l]
		}
		for _, model := range []Model{&Oriented{}, &Movement{}} {
			in, out := solved(model, p)
			in2, out2 := solved(model, turned)
			want := make([]float64, n)
			for i, k := range rows {
				want[i] = in[k]
			}
			same(t, "in", in2, want)
			want = make([]float64, m)
			for j, l := range cols {
				want[j] = out[l]
			}
			same(t, "out", out2, want)
		}
	})
}
