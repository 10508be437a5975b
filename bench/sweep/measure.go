package sweep

import (
	"context"
	"fmt"

	"codeassay/bench"
	"codeassay/decoders/tally"
	"codeassay/estimators"
)

// cellGroups is the number of groups of cells that are left out in turn.
const cellGroups = 6

// keep finishes jobs of sizes into pieces and releases their sums.
func (g *engine) keep(ctx context.Context, out *bench.Outcome, jobs []*job) error {
	for _, j := range jobs {
		values := make([]bench.Values, len(j.snapshots))
		piece := g.piece(j, values)
		measured := len(g.windows) > 0
		// All draws of a size share one null law: the more draws, the fewer each needs.
		perDraw := shifts
		if j.draw > 0 {
			perDraw = max(4, shifts/g.layout.Draws)
		}
		if measured {
			piece.NullMean, piece.NullVar = make([][]float64, len(values)), make([][]float64, len(values))
		}
		err := g.parallel(ctx, len(j.snapshots), func(w, i int) {
			values[i] = g.finish[w].values(&j.snapshots[i])
			if measured {
				piece.NullMean[i], piece.NullVar[i] = g.finish[w].shiftNull(&j.snapshots[i], g.root.Child("null", j.draw, i), perDraw)
			}
		})
		if err != nil {
			return err
		}
		j.snapshots = nil
		out.Pieces = append(out.Pieces, piece)
	}
	return nil
}

// measureCells measures, size by size, how the information varies with the cells
// that happened to be recorded, where the draws do not tell that already.
func (g *engine) measureCells(ctx context.Context, out *bench.Outcome) error {
	var jobs []*job
	flush := func() error {
		if err := g.run(ctx, jobs); err != nil {
			return err
		}
		pieces := make([]bench.CellPiece, len(jobs))
		err := g.parallel(ctx, len(jobs), func(w, i int) { pieces[i] = g.finish[w].cellPiece(jobs[i]) })
		out.Cells = append(out.Cells, pieces...)
		jobs = nil
		return err
	}
	for i, n := range g.layout.Sizes {
		draw := 1
		if n == g.layout.Cells {
			draw = 0
		}
		if g.layout.CellsMeasured(i) != bench.ByGroups {
			continue
		}
		groups := min(cellGroups, n)
		jobs = append(jobs, g.deletionJob(g.store, g.order(draw), i, groups))
		if len(jobs) == g.cellBatch() {
			if err := flush(); err != nil {
				return err
			}
		}
	}
	if len(jobs) == 0 {
		return nil
	}
	return flush()
}

// cellSizes is the number of sizes that measureCells visits.
func (g *engine) cellSizes() int {
	sizes := 0
	for i := range g.layout.Sizes {
		if g.layout.CellsMeasured(i) == bench.ByGroups {
			sizes++
		}
	}
	return sizes
}

// cellBatch is the number of sizes whose cells are measured side by side.
func (g *engine) cellBatch() int { return max(1, batchBytes/((1+cellGroups)*g.snapshotBytes())) }

// fewestForChance is the number of cells below which events cannot be dealt to
// other cells often enough for their trains to lose the dead time.
const fewestForChance = 8

// measureChance ranks the burst-free surrogate of the full ensemble.
func (g *engine) measureChance(ctx context.Context, out *bench.Outcome) error {
	if g.layout.Cells < fewestForChance {
		g.warnings = append(g.warnings, estimators.Warning{Severity: estimators.Note, About: "chance",
			Text:   fmt.Sprintf("no burst-free surrogate was ranked: it deals each event to another cell, which %s too few for; only the expected share of chance bursts is given", plural(g.layout.Cells)),
			Remedy: fmt.Sprintf("at least %d cells", fewestForChance)})
		return nil
	}
	var counts tally.Totals
	for u := range g.layout.Cells {
		counts = counts.Add(g.store.ChanceTotals(u, g.rules[u], g.totalS()))
	}
	j := &job{kind: chance, surrogate: g.root.Child("burst-free"), snapshots: []snapshot{g.newSnapshot(counts, g.layout.Cells)}}
	if err := g.run(ctx, []*job{j}); err != nil {
		return err
	}
	values := g.finish[0].values(&j.snapshots[0])
	out.Chance = &values
	out.ChanceSpikesPerS = j.snapshots[0].of.spikesPerS
	return nil
}

func plural(cells int) string {
	if cells == 1 {
		return "1 cell is"
	}
	return fmt.Sprintf("%d cells are", cells)
}
