package resampling

import "slices"

// Letters is the compact letter display of n items: two items share a letter if
// and only if they are not different. Columns of items, one a letter, are split
// at each different pair, dropped where they lie within another, and finally
// freed of every item that no pair needs there (insert, absorb and sweep, Piepho
// 2004, J. Comput. Graph. Stat. 13:456–466).
//
// Letters go to columns in the order of their first items, then of their last
// ones: "a" holds item 0, so items given from the best down begin with "a" at the
// best. Beyond "z" they go on with "aa", "ab", …. different is asked once for each
// i > j. The number of columns can grow exponentially with n where differences
// follow no order; a ranking's do.
func Letters(n int, different func(i, j int) bool) []string {
	if n == 0 {
		return nil
	}
	all := make([]bool, n)
	for i := range all {
		all[i] = true
	}
	columns := [][]bool{all}
	for i := range n {
		for j := range i {
			if !different(i, j) {
				continue
			}
			var next [][]bool
			for _, c := range columns {
				if !c[i] || !c[j] {
					next = append(next, c)
					continue
				}
				a, b := slices.Clone(c), slices.Clone(c)
				a[i], b[j] = false, false
				next = append(next, a, b)
			}
			columns = absorb(next)
		}
	}
	arrange(columns)
	columns = sweep(columns)
	arrange(columns)
	out := make([]string, n)
	for k, c := range columns {
		for i, in := range c {
			if in {
				out[i] += letter(k)
			}
		}
	}
	return out
}

// absorb drops columns that lie within another.
func absorb(columns [][]bool) [][]bool {
	var out [][]bool
	for i, c := range columns {
		keep := true
		for j, o := range columns {
			if i != j && within(c, o) && (!within(o, c) || j < i) {
				keep = false
				break
			}
		}
		if keep {
			out = append(out, c)
		}
	}
	return out
}

// sweep takes items out of columns, from the last column and item up, wherever
// all their pairs there, and the item itself, are held by other columns too.
// Taking one out only makes others more needed, so once over is enough.
func sweep(columns [][]bool) [][]bool {
	n := len(columns[0])
	held := make([]int, n*n) // columns that hold both; one item with itself
	for _, c := range columns {
		for i := range n {
			for j := range n {
				if c[i] && c[j] {
					held[i*n+j]++
				}
			}
		}
	}
	for k := len(columns) - 1; k >= 0; k-- {
		c := columns[k]
		for i := n - 1; i >= 0; i-- {
			needed := !c[i]
			for j := range n {
				needed = needed || c[j] && held[i*n+j] == 1
			}
			if needed {
				continue
			}
			for j := range n {
				if c[j] {
					held[i*n+j]--
					if i != j {
						held[j*n+i]--
					}
				}
			}
			c[i] = false
		}
	}
	return slices.DeleteFunc(columns, func(c []bool) bool { return !slices.Contains(c, true) })
}

// arrange sorts columns by their first item, then by their last, then by all.
func arrange(columns [][]bool) {
	slices.SortFunc(columns, func(a, b []bool) int {
		if d := slices.Index(a, true) - slices.Index(b, true); d != 0 {
			return d
		}
		if d := lastTrue(a) - lastTrue(b); d != 0 {
			return d
		}
		return slices.Compare(bits(a), bits(b))
	})
}

// within tells whether b holds all that a holds.
func within(a, b []bool) bool {
	for i := range a {
		if a[i] && !b[i] {
			return false
		}
	}
	return true
}

func bits(c []bool) []int {
	out := make([]int, len(c))
	for i, in := range c {
		if in {
			out[i] = 1
		}
	}
	return out
}

func lastTrue(c []bool) int {
	for i := len(c) - 1; i >= 0; i-- {
		if c[i] {
			return i
		}
	}
	return -1
}

// letter is the k-th of a … z, aa, ab, …
func letter(k int) string {
	s := string(rune('a' + k%26))
	for k = k/26 - 1; k >= 0; k = k/26 - 1 {
		s = string(rune('a'+k%26)) + s
	}
	return s
}
