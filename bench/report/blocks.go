package report

// tone says how a piece of text is meant. It is shown by colour where there is
// any, and always by the words themselves too.
type tone uint8

const (
	neutral tone = iota
	strong       // headings and winners
	faint        // what is not detected; asides
	alert        // warnings
)

// block is one of heading, paragraph, item, table.
type block interface{}

// heading opens a part of a report, at level 1 (title), 2 or 3.
type heading struct {
	level int
	text  string
}

// paragraph is running text.
type paragraph struct {
	text string
	tone tone
}

// item is one entry of a list. lead comes first, set apart.
type item struct {
	lead, text string
	tone       tone
}

// table is rectangular: every row has one cell a column.
type table struct {
	caption string
	columns []column
	rows    [][]cell
}

// column says how a column behaves.
type column struct {
	head string
	unit string // in the heading, on its own line where a line is narrow
	// number columns are set flush right; point aligns them at the decimal point.
	number, point bool
	// Where a width does not hold the table, columns go in falling order of
	// expendable; 0 stays. Columns of at least spare were a luxury: their absence
	// is not mentioned.
	expendable int
	// thin columns are alike, as ensemble sizes are: an even choice of them, first
	// and last included, stands for all.
	thin bool
	wrap bool // cells may be broken over lines
}

const spare = 10

// cell is one entry of a table.
type cell struct {
	text string
	tone tone
}

// name is the column's heading on one line.
func (c column) name() string {
	if c.unit == "" {
		return c.head
	}
	return c.head + " " + c.unit
}

// keep returns the table with only the columns for which in holds.
func (t table) keep(in func(int) bool) table {
	out := table{caption: t.caption, rows: make([][]cell, len(t.rows))}
	for c := range t.columns {
		if !in(c) {
			continue
		}
		out.columns = append(out.columns, t.columns[c])
		for r := range t.rows {
			out.rows[r] = append(out.rows[r], t.rows[r][c])
		}
	}
	return out
}

// copied returns the table with cells of its own.
func (t table) copied() table {
	return t.keep(func(int) bool { return true })
}
