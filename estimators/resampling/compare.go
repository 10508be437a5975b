package resampling

import (
	"math"
	"slices"
)

// Holm adjusts p-values for the family-wise error rate: p₍ᵢ₎(m−i+1), made
// monotone (Holm 1979, Scand. J. Stat. 6:65–70). The input is not changed.
func Holm(p []float64) []float64 {
	out := make([]float64, len(p))
	running := 0.0
	for rank, i := range order(p) {
		running = math.Max(running, math.Min(1, p[i]*float64(len(p)-rank)))
		out[i] = running
	}
	return out
}

// BenjaminiHochberg adjusts p-values for the false discovery rate: p₍ᵢ₎m/i, made
// monotone from the top (Benjamini and Hochberg 1995, J. R. Stat. Soc. B
// 57:289–300). The input is not changed.
func BenjaminiHochberg(p []float64) []float64 {
	out := make([]float64, len(p))
	running := 1.0
	ranked := order(p)
	for rank := len(p) - 1; rank >= 0; rank-- {
		i := ranked[rank]
		running = math.Min(running, p[i]*float64(len(p))/float64(rank+1))
		out[i] = running
	}
	return out
}

func order(p []float64) []int {
	index := make([]int, len(p))
	for i := range index {
		index[i] = i
	}
	slices.SortStableFunc(index, func(a, b int) int {
		switch {
		case p[a] < p[b]:
			return -1
		case p[a] > p[b]:
			return 1
		}
		return 0
	})
	return index
}

// Letters is the compact letter display of n items: two items share a letter if
// and only if they are not different (insert and absorb, Piepho 2004, J. Comput.
// Graph. Stat. 13:456–466). Letters are given in the order of items, so "a"
// holds item 0; beyond "z" they go on with "aa".
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
	slices.SortFunc(columns, func(a, b []bool) int {
		if d := slices.Index(a, true) - slices.Index(b, true); d != 0 {
			return d
		}
		if d := lastTrue(a) - lastTrue(b); d != 0 {
			return d
		}
		return slices.Compare(bits(a), bits(b))
	})
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

func letter(k int) string {
	s := string(rune('a' + k%26))
	for k = k/26 - 1; k >= 0; k = k/26 - 1 {
		s = string(rune('a'+k%26)) + s
	}
	return s
}
