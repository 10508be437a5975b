package resampling

import (
	"bufio"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// golden reads R's values: by kind, the numbers of each line.
func golden(t *testing.T) map[string][][]float64 {
	file, err := os.Open("../../testdata/resampling/golden.csv")
	require.NoError(t, err)
	defer file.Close()
	out := map[string][][]float64{}
	lines := bufio.NewScanner(file)
	for lines.Scan() {
		if strings.HasPrefix(lines.Text(), "#") {
			continue
		}
		fields := strings.Split(lines.Text(), ",")
		var values []float64
		for _, f := range fields[1:] {
			v, err := strconv.ParseFloat(f, 64)
			require.NoError(t, err)
			values = append(values, v)
		}
		out[fields[0]] = append(out[fields[0]], values)
	}
	require.NoError(t, lines.Err())
	return out
}

// Relative 1e-12: a product of two numbers, rounded otherwise.
func TestAdjustmentsAgainstR(t *testing.T) {
	all := golden(t)
	for kind, adjust := range map[string]func([]float64) []float64{"holm": Holm, "bh": BenjaminiHochberg} {
		require.Len(t, all[kind], 6)
		for _, v := range all[kind] {
			p, want := v[:len(v)/2], v[len(v)/2:]
			for i, got := range adjust(p) {
				assert.InDelta(t, want[i], got, 1e-12*want[i], "%s of %v", kind, p)
			}
		}
	}
}

// R's qt and ours agree to about 1e-8 of the quantile: both invert the
// incomplete beta function by iteration.
func TestStudentQuantilesAgainstR(t *testing.T) {
	rows := golden(t)["t"]
	require.Len(t, rows, 36)
	for _, v := range rows {
		low, high := TInterval(1, 4, v[0], v[1])
		assert.InEpsilon(t, v[2], (high-1)/2, 1e-8, "dof %g, confidence %g", v[0], v[1])
		assert.InEpsilon(t, v[2], (1-low)/2, 1e-8, "dof %g, confidence %g", v[0], v[1])
	}
}

func TestBinomialIntervalsAgainstR(t *testing.T) {
	all := golden(t)
	for kind, interval := range map[string]func(k, n int, confidence float64) (float64, float64){"exact": ClopperPearson, "wilson": Wilson} {
		require.Len(t, all[kind], 24)
		for _, v := range all[kind] {
			low, high := interval(int(v[0]), int(v[1]), v[2])
			assert.InDelta(t, v[3], low, 1e-10+1e-7*v[3], "%s %v", kind, v)
			assert.InDelta(t, v[4], high, 1e-10+1e-7*v[4], "%s %v", kind, v)
		}
	}
}

// Tails from 1 to 2e-300.
func TestGammaTailAgainstR(t *testing.T) {
	rows := golden(t)["gamma"]
	require.Greater(t, len(rows), 60)
	for _, v := range rows {
		shape, x, want := v[0], v[1], math.Max(v[2], 1e-300)
		assert.InEpsilon(t, want, GammaTail(x, shape, shape), 1e-8, "shape %g, x %g", shape, x)
		assert.InEpsilon(t, want, GammaTail(3*x, 3*shape, 9*shape), 1e-8, "scale 3, shape %g, x %g", shape, x)
	}
}
