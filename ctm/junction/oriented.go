package junction

type Problem struct{ Sending, Receiving, Priority, Turn []float64 }
type Oriented struct{}

func (o *Oriented) Flows(in, out []float64, p *Problem) {
	n, m := len(in), len(out)
	R := append([]float64(nil), p.Receiving...)
	done := make([]bool, n)
	clear(in)
	clear(out)
	for i := range n {
		if p.Sending[i] <= 0 {
			done[i] = true
		}
	}
	for {
		best := -1
		a := 0.0
		for j := range m {
			s := 0.0
			for i := range n {
				if !done[i] {
					s += p.Turn[i*m+j] * p.Priority[i]
				}
			}
			if s > 0 {
				x := max(0, R[j]) / s
				if best < 0 || x < a {
					best, a = j, x
				}
			}
		}
		if best < 0 {
			break
		}
		any := false
		for i := range n {
			if !done[i] && p.Turn[i*m+best] > 0 && p.Sending[i] <= a*p.Priority[i] {
				any = true
				in[i] = p.Sending[i]
				done[i] = true
				for j := range m {
					R[j] -= in[i] * p.Turn[i*m+j]
				}
			}
		}
		if !any {
			for i := range n {
				if !done[i] && p.Turn[i*m+best] > 0 {
					in[i] = a * p.Priority[i]
					done[i] = true
					for j := range m {
						R[j] -= in[i] * p.Turn[i*m+j]
					}
				}
			}
		}
	}
	for i := range n {
		for j := range m {
			out[j] += in[i] * p.Turn[i*m+j]
		}
	}
}
