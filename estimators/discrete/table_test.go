package discrete

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestTablesAddSubtractAndShift(t *testing.T) {
	rows, columns := []uint8{0, 1, 1, 0, 2}, []uint8{1, 0, 1, 1, 0}
	all, part := NewTable(3, 2), NewTable(3, 2)
	Tabulate(all, rows, columns)
	assert.Equal(t, FromCounts([][]int64{{0, 2}, {1, 1}, {1, 0}}), all)
	assert.Equal(t, [2]int{3, 2}, [2]int{all.Rows(), all.Columns()})
	assert.Equal(t, int64(2), all.Count(0, 1))
	assert.Equal(t, int64(5), all.Samples())
	assert.Equal(t, []int64{2, 2, 1}, all.RowCounts(nil))
	assert.Equal(t, []int64{2, 3}, all.ColumnCounts([]int64{-1, -1}), "dst is overwritten")
	Tabulate(part, rows[:2], columns[:2])
	rest := all.Clone()
	rest.Subtract(part)
	want := NewTable(3, 2)
	Tabulate(want, rows[2:], columns[2:])
	assert.Equal(t, want, rest)
	rest.Add(part)
	assert.Equal(t, all, rest)
	shifted := NewTable(3, 2)
	want.Reset()
	Tabulate(want, rows, []uint8{1, 1, 0, 1, 0})
	for _, shift := range []int{2, -3, 12} {
		shifted.Reset()
		TabulateShifted(shifted, rows, columns, shift)
		assert.Equal(t, want, shifted, "shift %d", shift)
	}
	TabulateShifted(NewTable(1, 1), nil, nil, 3)
}

func TestTablesPanicOnMisuse(t *testing.T) {
	all, part := FromCounts([][]int64{{1, 2}}), FromCounts([][]int64{{0, 1}})
	for name, misuse := range map[string]func(){
		"no rows":       func() { NewTable(0, 2) },
		"no row":        func() { FromCounts(nil) },
		"ragged":        func() { FromCounts([][]int64{{1, 2}, {3}}) },
		"negative":      func() { FromCounts([][]int64{{1, -2}}) },
		"not a part":    func() { part.Subtract(all) },
		"another shape": func() { part.Add(NewTable(2, 1)) },
		"column":        func() { all.Count(0, 2) },
		"row":           func() { all.Count(1, 0) },
		"dst":           func() { all.RowCounts(make([]int64, 2)) },
		"lengths":       func() { Tabulate(all, make([]uint8, 2), make([]uint8, 3)) },
		"lengths, moved": func() {
			TabulateShifted(all, make([]uint8, 2), make([]uint8, 3), 1)
		},
		"outside, few": func() { Tabulate(all, []uint8{1}, []uint8{0}) },
	} {
		assert.Panics(t, misuse, name)
	}
	assert.Equal(t, FromCounts([][]int64{{1, 2}}), all)
}

// Short, long, small and large tables against one increment a sample.
func TestTabulateAgainstCounting(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, shape := range [][2]int{{1, 1}, {8, 8}, {3, 16}, {16, 16}, {17, 2}, {2, 200}, {256, 3}} {
		for _, n := range []int{0, 1, 255, 256, 257, 5000} {
			rows, columns := make([]uint8, n), make([]uint8, n)
			want := NewTable(shape[0], shape[1])
			for i := range rows {
				rows[i], columns[i] = uint8(rng.IntN(shape[0])), uint8(rng.IntN(shape[1]))
				want.counts[int(rows[i])*shape[1]+int(columns[i])]++
			}
			got := NewTable(shape[0], shape[1])
			Tabulate(got, rows, columns)
			assert.Equal(t, want, got)
			Tabulate(got, rows, columns)
			want.Add(want.Clone())
			assert.Equal(t, want, got, "counts add up")
		}
	}
}

// One level outside among many, at every kind of place, is found, and the table
// is left as it was.
func TestTabulateFindsALevelOutside(t *testing.T) {
	for _, bad := range [][2]uint8{{4, 0}, {0, 6}, {15, 15}, {16, 0}, {0, 16}, {4, 255}, {255, 255}} {
		for _, at := range []int{0, 1, 998, 999, 1000} {
			rows, columns := make([]uint8, 1001), make([]uint8, 1001)
			rows[at], columns[at] = bad[0], bad[1]
			table := NewTable(4, 6)
			assert.PanicsWithValue(t, fmt.Sprintf("discrete: level pair (%d, %d) outside a table of 4 × 6", bad[0], bad[1]),
				func() { Tabulate(table, rows, columns) })
			assert.True(t, slices.Equal(table.counts, make([]int64, 24)))
		}
	}
}
