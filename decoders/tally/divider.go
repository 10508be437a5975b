package tally

import "math/bits"

// divider divides by a constant: the quotient of a 64-bit division at a fraction
// of its cost.
type divider struct {
	by, reciprocal uint64
}

func newDivider(by int64) divider {
	return divider{uint64(by), (1<<64 - 1) / uint64(by)}
}

// quotient is t / by for t ≥ 0. The product with the rounded-down reciprocal is
// the quotient or one less: t/by − t·⌊(2⁶⁴−1)/by⌋/2⁶⁴ < t·(by+1)/(by·2⁶⁴) ≤ 1.
func (d divider) quotient(t int64) uint64 {
	q, _ := bits.Mul64(uint64(t), d.reciprocal)
	if uint64(t)-q*d.by >= d.by {
		q++
	}
	return q
}
