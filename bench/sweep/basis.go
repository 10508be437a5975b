package sweep

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"codeassay/decoders"
)

// codeBasis says which signals are read off an ensemble and transformed, and how
// every code follows from them. Linear codes that depend on each other share
// transforms: the singlet rate is the event rate less the burst rate.
type codeBasis struct {
	codes  []decoders.Code // visible ones first, then those the plan needs
	shown  int
	pairs  [][2]int
	spike  int // index of the spike rate, −1 where no pair needs it
	event  int
	linear [][6]float64 // weights of the basis signals over the six trains
	ratios []int        // codes read as ratios: signals after the linear ones
	mix    [][]float64  // code, signal: weight of the signal in the code
	parts  []ratioParts // of the ratio codes
	window int          // bins of the sliding window
	prior  float64
}

func newCodeBasis(visible []decoders.Code, pairs [][2]int, window int, prior float64) (codeBasis, error) {
	b := codeBasis{codes: slices.Clone(visible), shown: len(visible), pairs: pairs, spike: -1, event: -1, window: window, prior: prior}
	if len(pairs) > 0 {
		b.spike = b.require("spike-rate")
		b.event = b.require("event-rate")
	}
	for _, c := range b.codes {
		if !c.Linear() {
			continue
		}
		if _, dependent := b.express(c.Trains()); !dependent {
			b.linear = append(b.linear, c.Trains())
		}
	}
	signals := len(b.linear)
	for i, c := range b.codes {
		if !c.Linear() {
			b.ratios = append(b.ratios, i)
			signals++
		}
	}
	for _, i := range b.ratios {
		b.parts = append(b.parts, b.split(b.codes[i]))
	}
	for i, c := range b.codes {
		row := make([]float64, signals)
		if c.Linear() {
			weights, _ := b.express(c.Trains())
			copy(row, weights)
		} else {
			row[len(b.linear)+slices.Index(b.ratios, i)] = 1
		}
		b.mix = append(b.mix, row)
	}
	return b, nil
}

// require returns the index of a built-in code, adding it unseen if need be.
func (b *codeBasis) require(name string) int {
	for i, c := range b.codes {
		if c.Name == name {
			return i
		}
	}
	for _, c := range decoders.BuiltIn() {
		if c.Name == name {
			b.codes = append(b.codes, c)
			return len(b.codes) - 1
		}
	}
	panic("sweep: no built-in code " + name)
}

// express writes train weights as a combination of the linear basis, and
// reports whether that is possible.
func (b *codeBasis) express(w [6]float64) ([]float64, bool) {
	if len(b.linear) == 0 {
		return nil, false
	}
	a := mat.NewDense(6, len(b.linear), nil)
	for j, v := range b.linear {
		a.SetCol(j, v[:])
	}
	var x mat.VecDense
	target := mat.NewVecDense(6, slices.Clone(w[:]))
	if err := x.SolveVec(a, target); err != nil {
		return nil, false
	}
	var rest mat.VecDense
	rest.MulVec(a, &x)
	rest.SubVec(&rest, target)
	if mat.Norm(&rest, math.Inf(1)) > 1e-9*mat.Norm(target, math.Inf(1)) {
		return nil, false
	}
	out := make([]float64, len(b.linear))
	for j := range out {
		// Weights are small whole numbers in all but exotic codes: drop the
		// solver's last digits, so that sums of counts stay exact.
		out[j] = math.Round(x.AtVec(j)*1e9) / 1e9
	}
	return out, true
}

// ratioParts are a ratio's numerator and divisor as combinations of the linear
// basis; nil where they are none.
type ratioParts struct{ num, den []float64 }

func (b *codeBasis) split(c decoders.Code) ratioParts {
	events := func(w [4]float64) []float64 {
		weights, ok := b.express([decoders.Trains]float64{0, w[0], w[1], w[2], w[3]})
		if !ok {
			return nil
		}
		return weights
	}
	return ratioParts{events(c.Weights), events(c.Over)}
}

// signals is the number of signals that are transformed.
func (b *codeBasis) signals() int { return len(b.linear) + len(b.ratios) }
