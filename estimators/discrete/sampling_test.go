package discrete

import (
	"math"
	"testing"

	"codeassay/estimators"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func TestSampling(t *testing.T) {
	// Three rows and two columns are in use, 21 samples.
	s := FromCounts([][]int64{{5, 0, 3}, {0, 0, 0}, {4, 0, 4}, {4, 0, 1}}).Sampling()
	assert.Equal(t, int64(21), s.Samples)
	assert.Equal(t, 6, s.Cells)
	assert.Equal(t, 3.5, s.PerCell)
	assert.InDelta(t, 2/(42*math.Ln2), s.PlugInBias, 1e-15)
	assert.Equal(t, int64(3), s.Lacking(4))
	assert.Equal(t, int64(0), s.Lacking(3.5))
	got := s.Warnings("soma, event-rate")
	require.Len(t, got, 1)
	assert.Equal(t, estimators.Warning{Severity: estimators.Weak, About: "soma, event-rate",
		Text:   "3.5 samples a cell of the joint table (21 samples, 6 cells), too thin to trust: uncorrected information is 0.069 bits a sample too high, and corrections fail below 4 samples a cell",
		Remedy: "27 more samples for 8 a cell, or fewer levels"}, got[0])

	note := FromCounts([][]int64{{4, 4}, {4, 4}}).Sampling().Warnings("x")
	require.Len(t, note, 1)
	assert.Equal(t, estimators.Note, note[0].Severity)
	assert.Empty(t, FromCounts([][]int64{{8, 8}, {8, 8}}).Sampling().Warnings("x"))

	none := NewTable(2, 2).Sampling()
	assert.Equal(t, Sampling{}, none)
	require.Len(t, none.Warnings("x"), 1)
	assert.Equal(t, estimators.Weak, none.Warnings("x")[0].Severity)
}
