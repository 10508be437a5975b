package seed

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestChildrenDifferAndRepeat(t *testing.T) {
	root := New(7)
	seen := map[Seed]string{root: "root"}
	add := func(name string, s Seed) {
		other, dup := seen[s]
		assert.False(t, dup, "%s equals %s", name, other)
		seen[s] = name
	}
	for i := range 1000 {
		add("draw", root.Child("draw", i))
	}
	add("unit", root.Child("unit", 3))
	add("draw 3, 3", root.Child("draw", 3, 3))
	add("grandchild", root.Child("draw", 3).Child("draw", 3))
	add("split name", root.Child("dra").Child("w", 3))
	add("other root", New(8))
	add("negative index", root.Child("draw", -1))
	assert.Equal(t, root.Child("draw", 3), New(7).Child("draw", 3))
}

// Published results are reproduced by these values: a change breaks the promise
// of the same bytes and needs a new version.
func TestValuesArePinned(t *testing.T) {
	assert.Equal(t, []int{2, 3, 1, 4, 0}, New(7).Child("draw", 1).Perm(nil, 5))
	assert.Equal(t, uint64(0x635bbdd9d3534037), New(7).Child("noise").Rand().Uint64())
	r := New(7).Child("noise").Rand()
	assert.Equal(t, [3]float64{0.8669251563496861, -0.2228413073078893, 0.7992857795489732}, [3]float64{r.Float64(), r.NormFloat64(), r.ExpFloat64()})
	assert.Equal(t, 443, r.IntN(1000))
}

// What was drawn before, and from what, leaves no trace.
func TestRandStartsAnew(t *testing.T) {
	s := New(7).Child("noise")
	want := s.Rand().Uint64()
	s.Rand().Uint64()
	s.Child("other").Perm(nil, 10)
	assert.Equal(t, want, s.Rand().Uint64())
}

// First values of neighbouring children fill the unit square evenly: χ² of 256
// cells within 5 standard deviations of its 255 degrees of freedom, for first and
// second neighbours.
func TestNeighboursAreIndependent(t *testing.T) {
	const n = 20000
	var first []float64
	for i := range n + 2 {
		first = append(first, New(7).Child("unit", i).Rand().Float64())
	}
	for _, lag := range []int{1, 2} {
		var cells [256]float64
		for i := range n {
			cells[int(first[i]*16)*16+int(first[i+lag]*16)]++
		}
		chi2 := 0.0
		for _, c := range cells {
			chi2 += (c - n/256.0) * (c - n/256.0) / (n / 256.0)
		}
		assert.InDelta(t, 255, chi2, 5*math.Sqrt(2*255))
	}
}

func TestPermIsAPermutation(t *testing.T) {
	dst := make([]int, 100)
	New(1).Perm(dst, 100)
	seen := make([]bool, 100)
	for _, v := range dst {
		assert.False(t, seen[v])
		seen[v] = true
	}
	assert.Panics(t, func() { New(1).Perm(make([]int, 3), 4) })
}
