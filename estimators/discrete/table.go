package discrete

import "fmt"

// Table is a joint table of counts, row levels by column levels. Counts are
// whole numbers, so tables of blocks add and subtract exactly.
type Table struct {
	rows, columns int
	counts        []int64
}

// NewTable is an empty table.
func NewTable(rows, columns int) *Table {
	return &Table{rows: rows, columns: columns, counts: make([]int64, rows*columns)}
}

// FromCounts is a table of the given counts, row by row. It panics where rows
// differ in length or a count is negative.
func FromCounts(counts [][]int64) *Table {
	t := NewTable(len(counts), len(counts[0]))
	for i, row := range counts {
		if len(row) != t.columns {
			panic("discrete: rows of a table differ in length")
		}
		for j, n := range row {
			if n < 0 {
				panic("discrete: a negative count")
			}
			t.counts[i*t.columns+j] = n
		}
	}
	return t
}

// Rows is the number of row levels.
func (t *Table) Rows() int { return t.rows }

// Columns is the number of column levels.
func (t *Table) Columns() int { return t.columns }

// Count is the count of one cell.
func (t *Table) Count(row, column int) int64 { return t.counts[row*t.columns+column] }

// Samples is the sum of all counts.
func (t *Table) Samples() int64 {
	n := int64(0)
	for _, c := range t.counts {
		n += c
	}
	return n
}

// SamplesPerCell is the number of samples over the number of cells: below four
// no correction can be trusted, at eight the jackknife is good to about 1 %.
func (t *Table) SamplesPerCell() float64 { return float64(t.Samples()) / float64(len(t.counts)) }

// Clone is a copy.
func (t *Table) Clone() *Table {
	return &Table{t.rows, t.columns, append([]int64(nil), t.counts...)}
}

// Reset clears all counts.
func (t *Table) Reset() { clear(t.counts) }

// Add adds the counts of o, a table of the same shape.
func (t *Table) Add(o *Table) {
	t.mustMatch(o)
	for i, n := range o.counts {
		t.counts[i] += n
	}
}

// Subtract takes away the counts of o, a part of t.
func (t *Table) Subtract(o *Table) {
	t.mustMatch(o)
	for i, n := range o.counts {
		if t.counts[i] -= n; t.counts[i] < 0 {
			panic("discrete: subtracting a table that is not a part")
		}
	}
}

func (t *Table) mustMatch(o *Table) {
	if t.rows != o.rows || t.columns != o.columns {
		panic(fmt.Sprintf("discrete: tables of %d×%d and %d×%d", t.rows, t.columns, o.rows, o.columns))
	}
}

// Tabulate counts pairs of levels: rows[i] with columns[i].
func Tabulate(t *Table, rows, columns []uint8) { TabulateShifted(t, rows, columns, 0) }

// TabulateShifted counts pairs with the columns shifted around a circle:
// rows[i] with columns[(i+shift) mod n]. shift lies in [0, n).
func TabulateShifted(t *Table, rows, columns []uint8, shift int) {
	if len(rows) != len(columns) {
		panic("discrete: levels of unequal length")
	}
	cut := len(rows) - shift
	t.tabulate(rows[:cut], columns[shift:])
	t.tabulate(rows[cut:], columns[:shift])
}

func (t *Table) tabulate(rows, columns []uint8) {
	columns = columns[:len(rows)]
	for i, r := range rows {
		t.counts[int(r)*t.columns+int(columns[i])]++
	}
}

// marginals are the sums over columns and over rows.
func (t *Table) marginals() (rows, columns []int64) {
	rows, columns = make([]int64, t.rows), make([]int64, t.columns)
	for i, n := range t.counts {
		rows[i/t.columns] += n
		columns[i%t.columns] += n
	}
	return rows, columns
}
