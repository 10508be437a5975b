package sweep

import (
	"context"
	"slices"
	"sync"
	"sync/atomic"

	"codeassay/bench"
	"codeassay/decoders"
	"codeassay/decoders/tally"
	"codeassay/estimators"
	"codeassay/estimators/seed"
)

// batchBytes bounds the memory of the draws that are measured side by side;
// longer sweeps take more passes over the blocks.
const batchBytes = 192 << 20

// Request is a sweep to be run.
type Request struct {
	Study    bench.Study
	Codes    []decoders.Code
	Pairs    [][2]int // into Codes
	Source   bench.Source
	Workers  int                   // 0: one
	Progress func(done, total int) // may be nil; called from one goroutine at a time
}

// engine is a sweep in progress.
type engine struct {
	*plan
	store    *tally.Store
	workers  []*worker
	finish   []*finisher
	root     seed.Seed
	progress func(done, total int)
	steps    atomic.Int64
	total    int
	report   sync.Mutex
}

// Run measures everything that a study asks for. It stops early, with the
// context's error, when the context is done.
func Run(ctx context.Context, r Request) (*bench.Outcome, error) {
	p, err := newPlan(r.Study, r.Codes, r.Pairs, r.Source)
	if err != nil {
		return nil, err
	}
	// The streams are tested while the spikes are labelled.
	var streams sync.WaitGroup
	var tested []estimators.Warning
	streams.Go(func() { tested = p.testStreams() })
	store, err := tally.Build(ctx, r.Source, p.rules, p.spans, tally.Options{BinNs: p.binNs, HaloBins: p.halo, Workers: r.Workers})
	streams.Wait()
	p.warnings = append(p.warnings, tested...)
	if err != nil {
		return nil, err
	}
	g := &engine{plan: p, store: store, root: seed.New(r.Study.Seed), progress: r.Progress}
	for range max(1, r.Workers) {
		g.workers = append(g.workers, p.newWorker(store))
	}
	out := &bench.Outcome{ChanceSpikesPerS: 0}
	batches := g.drawBatches()
	g.total = len(p.blocks) * (2 + len(batches) + (g.cellSizes()+g.cellBatch()-1)/g.cellBatch())

	pilot, err := g.pilot(ctx)
	if err != nil {
		return nil, err
	}
	out.Spectra = g.spectra(&pilot.snapshots[0])
	g.noteDrift(pilot.snapshots[0].drift)
	if pilot.draw == 0 { // a piece of its own; of a smaller ensemble draw 1 measures it again
		if err := g.keep(ctx, out, []*job{pilot}); err != nil {
			return nil, err
		}
	}
	for _, batch := range batches {
		jobs := make([]*job, len(batch))
		for i, draw := range batch {
			jobs[i] = p.nestedJob(store, draw, g.order(draw), g.subSizes())
		}
		if err := g.run(ctx, jobs); err != nil {
			return nil, err
		}
		if err := g.keep(ctx, out, jobs); err != nil {
			return nil, err
		}
	}
	if err := g.measureCells(ctx, out); err != nil {
		return nil, err
	}
	if err := g.measureChance(ctx, out); err != nil {
		return nil, err
	}
	g.describe(out)
	g.noteChance(out)
	return out, nil
}

// order is the order in which a draw takes the units: all as they come in draw
// 0, at random in the others.
func (g *engine) order(draw int) []int {
	n := g.layout.Cells
	if draw == 0 {
		units := make([]int, n)
		for i := range units {
			units[i] = i
		}
		return units
	}
	return g.root.Child("draw", draw).Perm(nil, n)
}

// subSizes are the sizes below the full ensemble, which random draws measure.
func (g *engine) subSizes() []int {
	var out []int
	for i, n := range g.layout.Sizes {
		if n < g.layout.Cells {
			out = append(out, i)
		}
	}
	return out
}

// drawBatches groups the draws so that each group fits in memory.
func (g *engine) drawBatches() [][]int {
	sizes := len(g.subSizes())
	if sizes == 0 {
		return nil
	}
	draws := make([]int, g.layout.Draws)
	for i := range draws {
		draws[i] = i + 1
	}
	return slices.Collect(slices.Chunk(draws, max(1, batchBytes/(sizes*g.snapshotBytes()))))
}

// pilot measures the largest ensemble, from it the delay of the codes behind
// each stream, and where there is one measures again with the streams delayed.
func (g *engine) pilot(ctx context.Context) (*job, error) {
	last := len(g.layout.Sizes) - 1
	draw := 0
	if g.layout.Sizes[last] < g.layout.Cells {
		draw = 1
	}
	for attempt := 0; ; attempt++ {
		if err := g.sumStreams(ctx); err != nil {
			return nil, err
		}
		j := g.nestedJob(g.store, draw, g.order(draw), []int{last})
		j.snapshots[0].drift = make([]float64, g.stretches)
		if err := g.run(ctx, []*job{j}); err != nil {
			return nil, err
		}
		if attempt == 0 && g.settings.Estimate.Align && g.findDelays(&j.snapshots[0]) {
			g.quantiseStreams()
			continue
		}
		return j, nil
	}
}

// sumStreams transforms the streams over all blocks and readies the finishers.
func (g *engine) sumStreams(ctx context.Context) error {
	streams := make([][]sums, len(g.methods))
	for e, m := range g.methods {
		if !m.info.Spectral {
			continue
		}
		for range g.blocks {
			streams[e] = append(streams[e], g.newStreamSums(e))
		}
	}
	err := g.parallel(ctx, len(g.blocks), func(w, block int) {
		dst := make([]sums, len(g.methods))
		for e := range dst {
			if g.methods[e].info.Spectral {
				dst[e] = streams[e][block]
			}
		}
		g.workers[w].streamSums(block, dst)
		for e := range dst {
			if g.methods[e].info.Spectral {
				streams[e][block] = dst[e]
			}
		}
	})
	if err != nil {
		return err
	}
	streams = g.totals(streams, g.newStreamSums)
	g.finish = nil
	for range g.workers {
		g.finish = append(g.finish, g.newFinisher(streams))
	}
	return nil
}

// run visits all blocks for the jobs.
func (g *engine) run(ctx context.Context, jobs []*job) error {
	return g.parallel(ctx, len(g.blocks), func(w, block int) {
		g.workers[w].visit(block, jobs)
		g.step(1)
	})
}

// step reports progress.
func (g *engine) step(n int) {
	done := int(g.steps.Add(int64(n)))
	if g.progress == nil {
		return
	}
	g.report.Lock()
	defer g.report.Unlock()
	g.progress(min(done, g.total), g.total)
}

// parallel calls do(worker, i) for i in [0, n), each worker with scratch of its
// own. Results must go to places of their own, so that order does not matter.
func (g *engine) parallel(ctx context.Context, n int, do func(worker, i int)) error {
	var next atomic.Int64
	var wait sync.WaitGroup
	for w := range g.workers {
		wait.Go(func() {
			for {
				i := int(next.Add(1)) - 1
				if i >= n || ctx.Err() != nil {
					return
				}
				do(w, i)
			}
		})
	}
	wait.Wait()
	return ctx.Err()
}
