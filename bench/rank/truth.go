package rank

import (
	"math"

	"codeassay/bench"
	"codeassay/decoders"
	"codeassay/estimators/spectral"
)

const ln2 = math.Ln2

// TrainSpectra are what a synthetic scenario states of its size-resolved trains:
// events of 1, 2, 3 and ≥ 4 spikes, stamped at the first, and all spikes. All
// are two-sided densities at frequency f in Hz, for one cell where they are
// private and for one pair of cells where they are shared.
type TrainSpectra interface {
	// Private is the spectrum (i, j) that a cell does not share, in 1/s.
	Private(f float64) [5][5]complex128
	// Shared is the cross-spectrum of train i of one cell with train j of another.
	Shared(f float64) [5][5]complex128
	// Cross is the cross-spectrum of train i with each stream.
	Cross(f float64) [5][]complex128
	// Streams are the spectra of the streams.
	Streams(f float64) [][]complex128
}

// Truth is the known information of a synthetic scenario. It is derived here,
// and nowhere else, from the spectra that a scenario states and the weights that
// codes expose, and only after the estimates are made.
type Truth struct {
	Kind          string // exact, first-order or reference
	RelativeError float64
	Spectra       TrainSpectra
	// BurstShare is the scenario's baseline of bursts over events: what the
	// residual subtracts of each event.
	BurstShare float64

	known map[bench.Band][]spectraAt
}

// spectraAt are the stated spectra at one frequency.
type spectraAt struct {
	private, shared [5][5]complex128
	cross           [5][]complex128
	streams         [][]complex128
}

// over returns the spectra at the middles of a band's cells, once for all rows.
func (t *Truth) over(band bench.Band) []spectraAt {
	if at, ok := t.known[band]; ok {
		return at
	}
	at := make([]spectraAt, truthCells)
	for i := range at {
		f := band.Low + (float64(i)+0.5)*(band.High-band.Low)/truthCells
		at[i] = spectraAt{t.Spectra.Private(f), t.Spectra.Shared(f), t.Spectra.Cross(f), t.Spectra.Streams(f)}
	}
	if t.known == nil {
		t.known = map[bench.Band][]spectraAt{}
	}
	t.known[band] = at
	return at
}

// truthCells is the number of frequency cells that a band is integrated over;
// the spectra are smooth within it.
const truthCells = 400

// Weights are a linear code's weights over the five trains that a truth is stated
// for; false for a ratio.
func (t *Truth) Weights(c decoders.Code) ([5]float64, bool) {
	if !c.Linear() {
		return [5]float64{}, false
	}
	w := c.Trains() // spikes, e1 … e4, own baseline × events
	out := [5]float64{w[1], w[2], w[3], w[4], w[0]}
	for i := range 4 {
		out[i] += w[5] * t.BurstShare
	}
	return out, true
}

// row is the true rate of a single or partial row, None for a ratio code.
func (t *Truth) row(l *bench.Layout, key bench.RowKey, cells int) bench.Number {
	w, ok := t.Weights(l.Codes[key.Code])
	if !ok {
		return bench.None
	}
	return t.Rate([][5]float64{w}, cells, l.Bands[key.Band].Band, key.Stream, key.Kind == bench.Partial)
}

// joint is the true rate of a pair of linear codes about all streams.
func (t *Truth) joint(l *bench.Layout, key bench.RowKey, cells int) bench.Number {
	pair := l.Pairs[key.Pair]
	a, okA := t.Weights(l.Codes[pair[0]])
	b, okB := t.Weights(l.Codes[pair[1]])
	if !okA || !okB {
		return bench.None
	}
	return t.Rate([][5]float64{a, b}, cells, l.Bands[key.Band].Band, -1, false)
}

// Rate is the coherence rate in bits/s of codes with the given train weights,
// read off cells cells, about one stream (about all of them where stream is −1;
// given all others where partial is set), in a band.
func (t *Truth) Rate(codes [][5]float64, cells int, band bench.Band, stream int, partial bool) bench.Number {
	sum := 0.0
	width := (band.High - band.Low) / truthCells
	m := spectral.NewMatrix(len(t.Spectra.Streams(0)) + len(codes))
	for _, at := range t.over(band) {
		sum += width * at.nats(m, codes, cells, stream, partial)
	}
	return bench.Number(sum / ln2)
}

// nats is the information at one frequency.
func (at spectraAt) nats(m *spectral.Matrix, codes [][5]float64, cells, stream int, partial bool) float64 {
	streams := at.streams
	var order []int
	if stream >= 0 {
		if real(streams[stream][stream]) == 0 {
			return 0
		}
		order = []int{stream}
	}
	for s := range streams {
		if (stream < 0 || partial && s != stream) && real(streams[s][s]) > 0 {
			order = append(order, s)
		}
	}
	n := float64(cells)
	m.Resize(len(order) + len(codes))
	for i, s := range order {
		for j, r := range order[:i+1] {
			m.Set(i, j, streams[s][r])
		}
	}
	for a, w := range codes {
		row := len(order) + a
		for i, s := range order {
			c := complex(0, 0)
			for k := range w {
				c += complex(n*w[k], 0) * at.cross[k][s]
			}
			m.Set(row, i, c)
		}
		for b, v := range codes[:a+1] {
			c := complex(0, 0)
			for k := range w {
				for l := range v {
					c += complex(w[k]*v[l], 0) * (complex(n, 0)*at.private[k][l] + complex(n*n, 0)*at.shared[k][l])
				}
			}
			m.Set(row, len(order)+b, c)
		}
	}
	if partial && len(order) > 1 {
		return m.Partial()
	}
	return m.LogDetRatio(len(order))
}

// summary counts the rows whose interval holds the truth.
func (t *Truth) summary(doc *bench.Document) *bench.TruthSummary {
	s := &bench.TruthSummary{Kind: t.Kind, RelativeError: bench.Number(t.RelativeError)}
	for _, r := range doc.Rows {
		if r.TruthBitsPerS.Known() {
			s.Rows++
			if r.CILow <= r.TruthBitsPerS && r.TruthBitsPerS <= r.CIHigh {
				s.Held++
			}
		}
	}
	return s
}
