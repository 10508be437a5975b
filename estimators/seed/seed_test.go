package seed

import (
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
	assert.Equal(t, root.Child("draw", 3), New(7).Child("draw", 3))
}

// Published results are reproduced by these values: a change breaks the promise
// of the same bytes and needs a new version.
func TestValuesArePinned(t *testing.T) {
	assert.Equal(t, []int{2, 3, 1, 4, 0}, New(7).Child("draw", 1).Perm(nil, 5))
	assert.Equal(t, uint64(0x635bbdd9d3534037), New(7).Child("noise").Rand().Uint64())
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
