// Package kernel holds the inner loops over flat slices of cells. Flows are passenger cars per step, contents
// passenger cars per cell; no function allocates or calls through an interface.
package kernel

// Linear advances a run of cells of one piecewise-linear diagram by one step, in place and in one pass:
//
//	y[i]  = min(a n[i], q, b (nj - n[i+1]))      flow from cell i to i+1
//	n[i] += y[i-1] - y[i]
//
// with y[-1] = in and y[len(n)-1] = out given by the nodes. a and b are the Courant numbers of the two
// branches (0..1), q the capacity and nj the storage of a cell, which no content may exceed. (Daganzo 1994,
// Transportation Research B 28:269-287, equation 3.)
func Linear(n []float64, a, q, b, nj, in, out float64) {
	if len(n) == 0 {
		return
	}
	from := n[:len(n)-1]
	to := n[1:][:len(from)]
	here := n[0]
	for i := range from {
		next := to[i]
		y := min(a*here, q, b*(nj-next))
		from[i] = here + (in - y)
		in, here = y, next
	}
	n[len(n)-1] = here + (in - out)
}

// LinearOverfull is Linear for a run that may hold more than it can store, because lanes were closed under its
// traffic: nothing enters such a cell until it has drained.
func LinearOverfull(n []float64, a, q, b, nj, in, out float64) {
	if len(n) == 0 {
		return
	}
	from := n[:len(n)-1]
	to := n[1:][:len(from)]
	here := n[0]
	for i := range from {
		next := to[i]
		y := max(0, min(a*here, q, b*(nj-next)))
		from[i] = here + (in - y)
		in, here = y, next
	}
	n[len(n)-1] = here + (in - out)
}

// LinearFaces writes the flows out of each cell of a run into y without moving anything; the last is out.
// len(y) == len(n).
func LinearFaces(y, n []float64, a, q, b, nj, out float64) {
	last := len(n) - 1
	if last < 0 {
		return
	}
	y = y[:len(n)]
	for i := 0; i < last; i++ {
		y[i] = max(0, min(a*n[i], q, b*(nj-n[i+1])))
	}
	y[last] = out
}

// Faces writes the flows out of each cell of a run: min(sending[i], receiving[i+1]); the last is out.
// All lengths are equal; y may alias sending.
func Faces(y, sending, receiving []float64, out float64) {
	last := len(y) - 1
	if last < 0 {
		return
	}
	sending, receiving = sending[:len(y)], receiving[:len(y)]
	for i := 0; i < last; i++ {
		f := sending[i]
		if r := receiving[i+1]; r < f {
			f = r
		}
		y[i] = f
	}
	y[last] = out
}

// Advance adds to each cell what enters and takes what leaves: n[i] += y[i-1] - y[i], with y[-1] = in.
func Advance(n, y []float64, in float64) {
	y = y[:len(n)]
	for i := range n {
		n[i] += in - y[i]
		in = y[i]
	}
}

// Shares turns flows out of cells into the share of each cell's content that leaves, 0 where it is empty.
// share may alias y.
func Shares(share, y, n []float64) {
	share, y = share[:len(n)], y[:len(n)]
	for i := range n {
		if n[i] > 0 {
			share[i] = min(1, y[i]/n[i])
		} else {
			share[i] = 0
		}
	}
}

// Carry moves the given share of each cell of one commodity downstream: x[i] += in - share[i] x[i], where in
// is what left the cell before; it returns what left the last cell.
func Carry(x, share []float64, in float64) float64 {
	share = share[:len(x)]
	for i := range x {
		y := share[i] * x[i]
		x[i] += in - y
		in = y
	}
	return in
}

// Sum writes the passenger cars of all commodities: n[i] += pce x[i] after Clear.
func Sum(n, x []float64, pce float64) {
	x = x[:len(n)]
	for i := range n {
		n[i] += pce * x[i]
	}
}

// Flush sets contents below tiny to zero. Contents that decay towards zero would otherwise become denormal
// numbers, with which the arithmetic of many processors is many times slower (BenchmarkDenormal tells for the
// one at hand).
func Flush(n []float64, tiny float64) {
	for i := range n {
		if n[i] < tiny {
			n[i] = 0
		}
	}
}

// Gauge scales contents to densities per lane: k[i] = n[i] scale.
func Gauge(k, n []float64, scale float64) {
	k = k[:len(n)]
	for i := range n {
		k[i] = n[i] * scale
	}
}

// Scale multiplies x by a factor.
func Scale(x []float64, factor float64) {
	for i := range x {
		x[i] *= factor
	}
}
