package sweep

import "codeassay/estimators/spectral"

// sums are additive cross-spectral sums of one design over some blocks: auto
// spectra signal by signal, then cross-spectra, each Bins values.
type sums struct {
	auto  []float64
	cross []complex128
	tally spectral.Tally
}

func newSums(autos, crosses, bins int) sums {
	return sums{auto: make([]float64, autos*bins), cross: make([]complex128, crosses*bins)}
}

// add adds o to s.
func (s *sums) add(o sums) {
	for i, v := range o.auto {
		s.auto[i] += v
	}
	for i, v := range o.cross {
		s.cross[i] += v
	}
	s.tally = s.tally.Add(o.tally)
}

// less sets s to a − b, or to a − b + c where c is given.
func (s *sums) less(a, b sums, c *sums) {
	for i, v := range a.auto {
		s.auto[i] = v - b.auto[i]
	}
	for i, v := range a.cross {
		s.cross[i] = v - b.cross[i]
	}
	s.tally = a.tally.Sub(b.tally)
	if c != nil {
		s.add(*c)
	}
}

// reset clears s.
func (s *sums) reset() {
	clear(s.auto)
	clear(s.cross)
	s.tally = spectral.Tally{}
}

// Streams: stream i's auto-spectrum is the i-th; the cross-spectrum of streams
// i > j is number i(i−1)/2 + j. Codes: code c's auto-spectrum is the c-th; its
// cross-spectrum with stream s is number c·streams + s; those of pairs follow.

func (p *plan) newStreamSums(e int) sums {
	m := len(p.streams)
	return newSums(m, m*(m-1)/2, p.methods[e].design.Bins())
}

func (p *plan) newCodeSums(e int) sums {
	return newSums(len(p.codes.codes), len(p.codes.codes)*len(p.streams)+len(p.codes.pairs), p.methods[e].design.Bins())
}

func part[T any](x []T, i, bins int) []T { return x[i*bins : (i+1)*bins] }

// streamCross is the index of the cross-spectrum of streams i > j.
func streamCross(i, j int) int { return i*(i-1)/2 + j }

func (p *plan) codeCross(c, s int) int { return c*len(p.streams) + s }

func (p *plan) pairCross(i int) int { return len(p.codes.codes)*len(p.streams) + i }
