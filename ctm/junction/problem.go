// Package junction holds node models: pure functions from the sending flows of a node's approaches, the
// receiving flows of its ways out and the turning fractions to the flows that pass.
//
// [Oriented] is first in, first out: a vehicle that cannot leave holds back those behind it. [Movement] queues by
// movement: a blocked way out holds back only the vehicles bound for it. [Merge] and [Diverge] are the closed
// forms of nodes with one way out or one approach.
//
// All flows of a problem are in one unit (vehicles per second, per step, passenger cars per step): the models only
// compare, add and scale them.
package junction

import "math"

// Problem is one node in one step, with n approaches and m ways out.
//
// Models never write to it. Its slices may not overlap what a model writes to.
type Problem struct {
	// Sending is what each approach would let go, len n, each >= 0. +Inf is a queue without end; it is fine as long
	// as one of the ways out it uses has a finite receiving flow.
	Sending []float64

	// Receiving is what each way out would take, len m, each >= 0 (less counts as 0). +Inf is a way out that takes
	// everything.
	Receiving []float64

	// Priority is the capacity or merge priority of each approach, len n, in any unit. An approach with priority 0
	// gives way to all that have one.
	Priority []float64

	// Turn is the share of each approach's vehicles bound for each way out, n x m row-major. A row sums to 1; that of
	// an approach that sends nothing may be all zero.
	Turn []float64
}

// Model is a rule that says what passes a node.
type Model interface {
	// Flows writes what leaves each approach to in (len n) and what enters each way out to out (len m), in the
	// problem's unit.
	//
	// Always 0 <= in[i] <= Sending[i] and out[j] <= Receiving[j]*(1+1e-12), and the sums of both agree to round-off.
	// Flows panics if lengths disagree. A model keeps its scratch, so one value serves one goroutine; it allocates
	// only when a node is larger than those before.
	Flows(in, out []float64, p *Problem)
}

// slack is how far a way out may be overfilled, relative to its receiving flow. An approach's n shares are rounded
// n times, each within 1.2e-16: a node would need thousands of approaches to come near it.
const slack = 1e-12

// least stands in for a priority of 0: far under any real priority and still far from a denormal number.
const least = 1e-200

func (p *Problem) check(in, out []float64) (n, m int) {
	n, m = len(in), len(out)
	if len(p.Sending) != n || len(p.Priority) != n || len(p.Receiving) != m || len(p.Turn) != n*m {
		panic("junction: lengths of flows and problem disagree")
	}
	return n, m
}

func (p *Problem) weight(i int) float64 { return max(p.Priority[i], least) }

// rows writes q = turn x in, the flows of the movements when vehicles pass first in, first out, and their column
// sums to out. Either may be nil.
func (p *Problem) rows(q, out, in []float64) {
	clear(q)
	clear(out)
	m := len(p.Receiving)
	for i, flow := range in {
		if flow == 0 {
			continue // its row may hold anything
		}
		for j, f := range p.Turn[i*m : (i+1)*m] {
			if f <= 0 { // 0 times +Inf is no flow
				continue
			}
			if q != nil {
				q[i*m+j] = f * flow
			}
			if out != nil {
				out[j] += f * flow
			}
		}
	}
}

// fits reports whether every way out takes what is bound for it.
func (p *Problem) fits(out []float64) bool {
	for j, flow := range out {
		if !(flow <= p.Receiving[j]) {
			return false
		}
	}
	return true
}

// trim takes off what rounding put above the receiving flow.
func trim(out, receiving []float64) {
	for j, r := range receiving {
		out[j] = min(out[j], max(r, 0)*(1+slack))
	}
}

// take is rest - x, never below 0; +Inf stays.
func take(rest, x float64) float64 {
	if math.IsInf(rest, 1) {
		return rest
	}
	return max(rest-x, 0)
}

func resize[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}
