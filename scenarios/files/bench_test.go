package files

import (
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"github.com/stretchr/testify/require"

	"codeassay/scenarios"
)

// BenchmarkRead climbs in spikes, 100 a unit and second, from files in the page
// cache; bytes are those of the spikes' file.
func BenchmarkRead(b *testing.B) {
	for _, spikes := range []int{10_000, 100_000, 1_000_000} {
		spec := scenarios.Spec{Dt: 0.001, Streams: []scenarios.Stream{{Name: "soma", Samples: make([]float64, 1000)}}}
		spec.Streams[0].Samples[0] = 1
		for i := range spikes {
			spec.Columns.Unit = append(spec.Columns.Unit, strconv.Itoa(i/100))
			spec.Columns.TimeNS = append(spec.Columns.TimeNS, int64(i%100)*9_876_543)
		}
		rec, err := scenarios.New(spec)
		require.NoError(b, err)
		dir := b.TempDir()
		require.NoError(b, WriteCSV(dir, rec))
		require.NoError(b, WriteNPZ(filepath.Join(dir, "both.npz"), rec))
		for _, paths := range []Paths{
			{Spikes: filepath.Join(dir, "spikes.csv"), Streams: filepath.Join(dir, "streams.csv")},
			{Spikes: filepath.Join(dir, "both.npz")},
		} {
			b.Run(fmt.Sprintf("%s/%d", filepath.Ext(paths.Spikes)[1:], spikes), func(b *testing.B) {
				info, err := os.Stat(paths.Spikes)
				require.NoError(b, err)
				b.SetBytes(info.Size())
				for b.Loop() {
					_, err := Read(paths, Options{Workers: 1})
					require.NoError(b, err)
				}
			})
		}
	}
}
