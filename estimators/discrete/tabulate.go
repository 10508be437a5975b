package discrete

import "fmt"

// Tabulate counts pairs of levels, rows[i] with columns[i], on top of what t
// holds. It panics if the lengths differ or a level lies outside the table.
func Tabulate(t *Table, rows, columns []uint8) {
	if len(rows) != len(columns) {
		panic(fmt.Sprintf("discrete: %d row levels with %d column levels", len(rows), len(columns)))
	}
	if t.rows > smallSide || t.columns > smallSide || len(rows) < smallSide*smallSide {
		tabulateAny(t, rows, columns)
		return
	}
	tabulateSmall(t, rows, columns)
}

// TabulateShifted counts rows[i] with columns[(i+shift) mod n]: the response is
// moved against the stream on a circle, which keeps the time course of both and
// breaks what binds them. A shift may be negative or beyond n.
func TabulateShifted(t *Table, rows, columns []uint8, shift int) {
	n := len(columns)
	if len(rows) != n {
		panic(fmt.Sprintf("discrete: %d row levels with %d column levels", len(rows), n))
	}
	if n == 0 {
		return
	}
	shift = ((shift % n) + n) % n
	Tabulate(t, rows[:n-shift], columns[shift:])
	Tabulate(t, rows[n-shift:], columns[:shift])
}

// tabulateAny is one increment a sample.
func tabulateAny(t *Table, rows, columns []uint8) {
	for i, r := range rows {
		c := int(columns[i])
		if int(r) >= t.rows || c >= t.columns {
			panicOutside(t, int(r), c)
		}
		t.counts[int(r)*t.columns+c]++
	}
}

// smallSide bounds the tables whose cells fit a byte: r + 16 c.
const smallSide = 16

// tabulateSmall counts even and odd samples apart. Slow signals hit the same
// cell again and again, and an increment must wait for the one before it on the
// same address.
func tabulateSmall(t *Table, rows, columns []uint8) {
	columns = columns[:len(rows)]
	var even, odd [smallSide * smallSide]int64
	var high uint8
	i := 0
	for ; i+1 < len(rows); i += 2 {
		r0, c0, r1, c1 := rows[i], columns[i], rows[i+1], columns[i+1]
		even[r0+c0<<4]++
		odd[r1+c1<<4]++
		high |= r0 | c0 | r1 | c1
	}
	if i < len(rows) {
		even[rows[i]+columns[i]<<4]++
		high |= rows[i] | columns[i]
	}
	var counted int64
	for r := range t.rows {
		for c := range t.columns {
			counted += even[r+c*smallSide] + odd[r+c*smallSide]
		}
	}
	// Beyond 15 the cell's byte overflows; below, what lies outside the table
	// is missing from the count.
	if high >= smallSide || counted != int64(len(rows)) {
		for i, r := range rows {
			if int(r) >= t.rows || int(columns[i]) >= t.columns {
				panicOutside(t, int(r), int(columns[i]))
			}
		}
	}
	for r := range t.rows {
		row := t.row(r)
		for c := range row {
			row[c] += even[r+c*smallSide] + odd[r+c*smallSide]
		}
	}
}

func panicOutside(t *Table, row, column int) {
	panic(fmt.Sprintf("discrete: level pair (%d, %d) outside a table of %d × %d", row, column, t.rows, t.columns))
}
