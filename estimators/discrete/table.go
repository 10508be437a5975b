package discrete

import "fmt"

// Table holds joint counts: rows are the levels of a stream, columns those of a
// response. Tables of the same shape add and subtract, so that leaving a block
// of samples out is one subtraction.
type Table struct {
	rows, columns int
	counts        []int64 // row by row
}

// NewTable is an empty table. It panics unless both sides are positive.
func NewTable(rows, columns int) *Table {
	if rows < 1 || columns < 1 {
		panic(fmt.Sprintf("discrete: a table of %d × %d levels; each side needs at least 1", rows, columns))
	}
	return &Table{rows: rows, columns: columns, counts: make([]int64, rows*columns)}
}

// FromCounts is a table of the given counts, row by row. It panics where rows
// differ in length, a count is negative, or there are none.
func FromCounts(counts [][]int64) *Table {
	if len(counts) == 0 {
		panic("discrete: a table without rows")
	}
	t := NewTable(len(counts), len(counts[0]))
	for r, row := range counts {
		if len(row) != t.columns {
			panic(fmt.Sprintf("discrete: row %d has %d counts, the first one %d", r, len(row), t.columns))
		}
		copy(t.row(r), row)
		for _, n := range row {
			if n < 0 {
				panic(fmt.Sprintf("discrete: row %d has a negative count", r))
			}
		}
	}
	return t
}

// Rows is the number of stream levels, used or not.
func (t *Table) Rows() int { return t.rows }

// Columns is the number of response levels, used or not.
func (t *Table) Columns() int { return t.columns }

// Count is the number of samples of a stream level with a response level.
func (t *Table) Count(row, column int) int64 {
	if uint(column) >= uint(t.columns) {
		panic(fmt.Sprintf("discrete: column %d of a table with %d", column, t.columns))
	}
	return t.counts[row*t.columns+column]
}

// Samples is the number of samples counted.
func (t *Table) Samples() int64 {
	sum := int64(0)
	for _, n := range t.counts {
		sum += n
	}
	return sum
}

// RowCounts are the stream's counts whatever the response; a nil dst is allocated.
func (t *Table) RowCounts(dst []int64) []int64 {
	dst = sized(dst, t.rows)
	for r := range dst {
		sum := int64(0)
		for _, n := range t.row(r) {
			sum += n
		}
		dst[r] = sum
	}
	return dst
}

// ColumnCounts are the response's counts whatever the stream; a nil dst is
// allocated.
func (t *Table) ColumnCounts(dst []int64) []int64 {
	dst = sized(dst, t.columns)
	clear(dst)
	for r := range t.rows {
		for c, n := range t.row(r) {
			dst[c] += n
		}
	}
	return dst
}

// Add adds the counts of a table of the same shape.
func (t *Table) Add(o *Table) {
	t.mustMatch(o)
	for i, n := range o.counts {
		t.counts[i] += n
	}
}

// Subtract takes away the counts of a table of the same shape. It panics where
// more is taken than is there: o was then never part of t.
func (t *Table) Subtract(o *Table) {
	t.mustMatch(o)
	for i, n := range o.counts {
		if n > t.counts[i] {
			panic("discrete: subtracting counts that the table does not hold")
		}
		t.counts[i] -= n
	}
}

// Clone is a copy that shares nothing with t.
func (t *Table) Clone() *Table {
	return &Table{rows: t.rows, columns: t.columns, counts: append([]int64(nil), t.counts...)}
}

// Reset empties the table for reuse.
func (t *Table) Reset() { clear(t.counts) }

func (t *Table) row(r int) []int64 { return t.counts[r*t.columns : (r+1)*t.columns] }

func (t *Table) mustMatch(o *Table) {
	if t.rows != o.rows || t.columns != o.columns {
		panic(fmt.Sprintf("discrete: tables of %d × %d and %d × %d do not combine", t.rows, t.columns, o.rows, o.columns))
	}
}

func sized(dst []int64, n int) []int64 {
	if dst == nil {
		return make([]int64, n)
	}
	if len(dst) != n {
		panic(fmt.Sprintf("discrete: dst has %d values; %d are needed", len(dst), n))
	}
	return dst
}
