package junction

import "math"

// Merge writes what leaves each approach of a node with one way out to in and returns what enters it:
//
//	q_i = min(S_i, a P_i) with the largest a such that sum q_i <= R
//
// With two approaches this is the merge of Daganzo, "The cell transmission model, part II", Transportation
// Research B 29 (1995) 79-93: q_1 = med{S_1, R - S_2, p_1 R} when S_1 + S_2 > R. len(in), len(sending) and
// len(priority) are equal, or it panics; in may be sending itself, for it is read before it is written.
func Merge(in, sending, priority []float64, receiving float64) float64 {
	if len(in) != len(sending) || len(priority) != len(sending) {
		panic("junction: lengths of flows and problem disagree")
	}
	rest := max(receiving, 0)
	total := 0.0
	for i, s := range sending {
		in[i] = max(s, 0)
		total += in[i]
	}
	if total <= rest {
		return total
	}
	return share(in, priority, rest)
}

// share cuts the flows wanted, which sum to more than rest, in proportion to priority; it returns their new sum.
// A flow already known to pass whole is kept negative until the end: it needs no scratch.
func share(flow, priority []float64, rest float64) float64 {
	for {
		sum := 0.0
		for i, s := range flow {
			if s > 0 {
				sum += max(priority[i], least)
			}
		}
		if sum == 0 {
			break
		}
		a := rest / sum
		found := false
		for i, s := range flow {
			if s > 0 && s <= a*max(priority[i], least) {
				found = true
				rest = take(rest, s)
				flow[i] = -s
			}
		}
		if found {
			continue
		}
		for i, s := range flow {
			if s > 0 {
				flow[i] = -a * max(priority[i], least)
			}
		}
		break
	}
	total := 0.0
	for i, s := range flow {
		flow[i] = math.Abs(s)
		total += flow[i]
	}
	return total
}

// Diverge writes what enters each way out of a node with one approach to out and returns what leaves the approach,
// first in, first out (Daganzo 1995, part II):
//
//	q = min(S, min over j of R_j / f_j),    q_j = f_j q
//
// The three slices have one length, or it panics; out may be receiving or turn itself.
func Diverge(out []float64, sending float64, receiving, turn []float64) float64 {
	if len(out) != len(receiving) || len(turn) != len(receiving) {
		panic("junction: lengths of flows and problem disagree")
	}
	q, used := max(sending, 0), false
	for j, f := range turn {
		if f > 0 {
			used = true
			q = min(q, max(receiving[j], 0)/f)
		}
	}
	if !used {
		q = 0
	}
	for j, f := range turn {
		out[j] = 0
		if f > 0 {
			out[j] = f * q
		}
	}
	return q
}
