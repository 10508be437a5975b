package sweep

import (
	"math/rand/v2"

	"codeassay/decoders"
	"codeassay/decoders/tally"
	"codeassay/estimators/spectral"
)

// worker owns the scratch of one goroutine.
type worker struct {
	p        *plan
	store    *tally.Store
	acc      *tally.Accumulator
	groups   []*tally.Accumulator // of deletions
	rest     *tally.Accumulator   // all units less one group
	scratch  []*spectral.Scratch  // by method
	streamOf [][][]complex128     // method, stream: transforms in this span
	signalOf [][]complex128       // method × signal: transforms in this span
	mixed    [2][]complex128
	signal   []float64
	lagged   []float64
	windowOf [][]float64 // signal sums a window
	num, den []float64
}

func (p *plan) newWorker(store *tally.Store) *worker {
	longest, windows := 0, 0
	for _, s := range p.spans {
		longest = max(longest, s.Bins)
	}
	for _, w := range p.windows {
		windows = max(windows, longest/w.bins)
	}
	w := &worker{p: p, store: store, acc: store.NewAccumulator(),
		signal: make([]float64, longest), lagged: make([]float64, longest),
		num: make([]float64, windows), den: make([]float64, windows)}
	for range p.codes.signals() {
		w.windowOf = append(w.windowOf, make([]float64, windows))
	}
	for _, m := range p.methods {
		if !m.info.Spectral {
			w.scratch = append(w.scratch, nil)
			w.streamOf = append(w.streamOf, nil)
			continue
		}
		w.scratch = append(w.scratch, m.design.NewScratch())
		w.streamOf = append(w.streamOf, make([][]complex128, len(p.streams)))
	}
	w.signalOf = make([][]complex128, len(p.methods)*p.codes.signals())
	return w
}

// visit measures every snapshot of the jobs in every span of one block. Calls
// for different blocks touch different parts of the jobs.
func (w *worker) visit(block int, jobs []*job) {
	for _, span := range w.p.blocks[block] {
		w.transformStreams(span)
		for _, j := range jobs {
			w.visitSpan(block, span, j)
		}
	}
}

func (w *worker) visitSpan(block, span int, j *job) {
	switch j.kind {
	case nested:
		w.acc.Reset(span)
		next := 0
		for i, u := range j.units {
			if next == len(j.sizes) {
				break
			}
			w.acc.Add(u)
			if i+1 == w.p.layout.Sizes[j.sizes[next]] {
				w.take(block, span, w.acc, &j.snapshots[next])
				next++
			}
		}
	case deletions:
		for len(w.groups) < j.groups {
			w.groups = append(w.groups, w.store.NewAccumulator())
		}
		if w.rest == nil {
			w.rest = w.store.NewAccumulator()
		}
		w.acc.Reset(span)
		for _, g := range w.groups[:j.groups] {
			g.Reset(span)
		}
		for i, u := range j.units {
			w.acc.Add(u)
			w.groups[i%j.groups].Add(u)
		}
		w.take(block, span, w.acc, &j.snapshots[0])
		for g := range j.groups {
			w.rest.Copy(w.acc)
			w.rest.Sub(w.groups[g])
			w.take(block, span, w.rest, &j.snapshots[1+g])
		}
	case chance:
		var rng *rand.Rand = j.surrogate.Child("span", span).Rand()
		w.store.BurstFree(w.acc, span, rng, w.p.rules)
		w.take(block, span, w.acc, &j.snapshots[0])
	}
}

// transformStreams transforms the streams of a span once for all jobs.
func (w *worker) transformStreams(span int) {
	s := w.p.spans[span]
	for e, m := range w.p.methods {
		if !m.info.Spectral {
			continue
		}
		for i := range w.p.streams {
			x := shifted(w.lagged[:s.Bins], w.p.streams[i][s.Trial], s.First, w.p.lags[i])
			w.streamOf[e][i] = grow(w.streamOf[e][i], m.design.Items(s.Bins)*m.design.Bins())
			m.design.Transforms(w.streamOf[e][i], x, 0, w.scratch[e])
		}
	}
}

// streamSums adds the streams' own spectra of every span of a block to dst, by
// method.
func (w *worker) streamSums(block int, dst []sums) {
	for _, span := range w.p.blocks[block] {
		w.transformStreams(span)
		for e, m := range w.p.methods {
			if !m.info.Spectral {
				continue
			}
			bins := m.design.Bins()
			dst[e].tally = dst[e].tally.Add(m.design.Tally(w.p.spans[span].Bins))
			for i, z := range w.streamOf[e] {
				m.design.AddAuto(part(dst[e].auto, i, bins), z)
				for k, y := range w.streamOf[e][:i] {
					m.design.AddCross(part(dst[e].cross, streamCross(i, k), bins), z, y)
				}
			}
		}
	}
}

// take adds what the accumulator holds of a span to a snapshot.
func (w *worker) take(block, span int, acc *tally.Accumulator, snap *snapshot) {
	p := w.p
	bins := p.spans[span].Bins
	signal := w.signal[:bins]
	basis := &p.codes
	for s := range basis.signals() {
		var mean float64 // over the recording
		if s < len(basis.linear) {
			acc.Linear(signal, basis.linear[s])
			mean = snap.means[s]
		} else {
			r := s - len(basis.linear)
			code := basis.codes[basis.ratios[r]]
			acc.Ratio(signal, code.Weights, code.Over, basis.window, code.Prior(basis.prior), snap.base[r])
			mean = snap.base[r]
		}
		for e, m := range p.methods {
			if !m.info.Spectral {
				continue
			}
			size := m.design.Items(bins) * m.design.Bins()
			at := e*basis.signals() + s
			w.signalOf[at] = grow(w.signalOf[at], size)
			m.design.Transforms(w.signalOf[at], signal, mean, w.scratch[e])
		}
		w.sumWindows(span, s, signal, acc, snap)
	}
	for e, m := range p.methods {
		if m.info.Spectral {
			w.addSpectra(e, block, span, snap)
		}
	}
	if snap.drift != nil {
		acc.Linear(signal, [decoders.Trains]float64{1})
		first := p.driftFirst[span]
		for i := range bins / p.driftBins {
			for _, v := range signal[i*p.driftBins : (i+1)*p.driftBins] {
				snap.drift[first+i] += v
			}
		}
	}
}

// addSpectra adds the spectra of every code, and its cross-spectra with every
// stream, to a snapshot.
func (w *worker) addSpectra(e, block, span int, snap *snapshot) {
	p := w.p
	design := p.methods[e].design
	bins := design.Bins()
	dst := &snap.sums[e][block]
	dst.tally = dst.tally.Add(design.Tally(p.spans[span].Bins))
	signals := w.signalOf[e*p.codes.signals() : (e+1)*p.codes.signals()]
	for c := range p.codes.codes {
		z := mix(&w.mixed[0], signals, p.codes.mix[c])
		design.AddAuto(part(dst.auto, c, bins), z)
		for s, y := range w.streamOf[e] {
			design.AddCross(part(dst.cross, p.codeCross(c, s), bins), z, y)
		}
		for i, pair := range p.codes.pairs {
			if pair[1] == c {
				first := mix(&w.mixed[1], signals, p.codes.mix[pair[0]])
				design.AddCross(part(dst.cross, p.pairCross(i), bins), z, first)
			}
		}
	}
}

// sumWindows files the window sums of signal s. Linear signals are summed bin by
// bin; a ratio is taken of sums over the whole window.
func (w *worker) sumWindows(span, s int, signal []float64, acc *tally.Accumulator, snap *snapshot) {
	p := w.p
	for i := range p.windows {
		plan := &p.windows[i]
		n := p.spans[span].Bins / plan.bins
		sums := w.windowOf[s][:n]
		if s < len(p.codes.linear) {
			for v := range sums {
				sum := 0.0
				for _, x := range signal[v*plan.bins : (v+1)*plan.bins] {
					sum += x
				}
				sums[v] = sum
			}
		} else {
			r := s - len(p.codes.linear)
			code := p.codes.codes[p.codes.ratios[r]]
			prior := code.Prior(p.codes.prior)
			w.eventWindows(w.num[:n], plan.bins, code.Weights, p.codes.parts[r].num, acc)
			w.eventWindows(w.den[:n], plan.bins, code.Over, p.codes.parts[r].den, acc)
			for v := range sums {
				sums[v] = snap.base[r]
				if d := w.den[v] + prior; d > 0 {
					sums[v] = (w.num[v] + prior*snap.base[r]) / d
				}
			}
		}
		for c := range p.codes.shown {
			weight := p.codes.mix[c][s]
			if weight == 0 {
				continue
			}
			dst := snap.windows[i][c][plan.first[span]:]
			for v, x := range sums {
				dst[v] += weight * x
			}
		}
	}
}

// eventWindows sums weighted events over windows: from the linear signals' sums
// where the weights are a combination of theirs, else from the counts.
func (w *worker) eventWindows(dst []float64, bins int, weights [4]float64, combination []float64, acc *tally.Accumulator) {
	if combination == nil {
		acc.Windows(dst, bins, weights)
		return
	}
	clear(dst)
	for s, weight := range combination {
		if weight == 0 {
			continue
		}
		for v := range dst {
			dst[v] += weight * w.windowOf[s][v]
		}
	}
}

// grow returns x with n values, anew where it is too short.
func grow(x []complex128, n int) []complex128 {
	if cap(x) < n {
		return make([]complex128, n)
	}
	return x[:n]
}

// mix is the weighted sum of signals, in spare; one signal of weight 1 is
// returned as it is.
func mix(spare *[]complex128, signals [][]complex128, weights []float64) []complex128 {
	only := -1
	for s, v := range weights {
		if v == 0 {
			continue
		}
		if only >= 0 || v != 1 {
			only = -2
			break
		}
		only = s
	}
	if only >= 0 {
		return signals[only]
	}
	*spare = grow(*spare, len(signals[0]))
	clear(*spare)
	for s, v := range weights {
		if v == 0 {
			continue
		}
		for i, x := range signals[s] {
			(*spare)[i] += complex(v*real(x), v*imag(x))
		}
	}
	return *spare
}
