package discrete

import (
	"fmt"
	"math"

	"codeassay/estimators"
)

const (
	// thinPerCell: fewer samples a cell and no correction is to be trusted
	// (common practice after Panzeri and Treves 1996, Network 7:87–107; from memory).
	thinPerCell = 4
	// amplePerCell: from here on the jackknife's bias is about 1 % of the
	// information (verified by simulation).
	amplePerCell = 8
)

// Sampling says how well samples fill a joint table.
type Sampling struct {
	Samples int64
	Cells   int     // rows in use × columns in use
	PerCell float64 // Samples/Cells
	// PlugInBias is by how much the uncorrected information is too high, in bits:
	// (rows−1)(columns−1)/(2N ln 2), rows and columns in use (Miller 1955).
	PlugInBias float64
}

// Sampling measures the table's filling; an empty table has no cells.
func (t *Table) Sampling() Sampling {
	p := t.profile(PlugIn)
	s := Sampling{Samples: p.total, Cells: p.rows * p.columns}
	if s.Cells > 0 {
		s.PerCell = float64(s.Samples) / float64(s.Cells)
		s.PlugInBias = float64((p.rows-1)*(p.columns-1)) / (2 * float64(s.Samples) * math.Ln2)
	}
	return s
}

// Lacking is the number of further samples that bring every cell to perCell on
// average; 0 where they are there.
func (s Sampling) Lacking(perCell float64) int64 {
	return max(0, int64(math.Ceil(perCell*float64(s.Cells)))-s.Samples)
}

// Warnings are a warning below 4 samples a cell, a note below 8, none otherwise.
// The remedy counts samples: a caller who knows how long a sample lasts turns
// Lacking into seconds and says that instead.
func (s Sampling) Warnings(about string) []estimators.Warning {
	if s.PerCell >= amplePerCell {
		return nil
	}
	w := estimators.Warning{Severity: estimators.Note, About: about,
		Text: fmt.Sprintf("%.3g samples a cell of the joint table (%d samples, %d cells): uncorrected information is %.2g bits a sample too high; corrected by the jackknife it is off by a few per cent",
			s.PerCell, s.Samples, s.Cells, s.PlugInBias),
		Remedy: fmt.Sprintf("%d more samples for %d a cell, or fewer levels", s.Lacking(amplePerCell), amplePerCell)}
	if s.PerCell < thinPerCell {
		w.Severity = estimators.Weak
		w.Text = fmt.Sprintf("%.3g samples a cell of the joint table (%d samples, %d cells), too thin to trust: uncorrected information is %.2g bits a sample too high, and corrections fail below %d samples a cell",
			s.PerCell, s.Samples, s.Cells, s.PlugInBias, thinPerCell)
	}
	if s.Cells == 0 {
		w.Text, w.Remedy = "the joint table holds no samples", "a longer recording"
	}
	return []estimators.Warning{w}
}
