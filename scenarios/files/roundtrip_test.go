package files

import (
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"codeberg.org/sbinet/npyio/npz"
	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"codeassay/scenarios"
)

// drawn is a recording of any shape, and the options that read it back.
func drawn(t *rapid.T, names *rapid.Generator[string]) (*scenarios.Recording, Options) {
	dt := rapid.OneOf(
		rapid.Map(rapid.IntRange(1, 50_000), func(hz int) float64 { return 1 / float64(hz) }),
		rapid.Map(rapid.Int64Range(1, 5e9), scenarios.Seconds),
		rapid.Float64Range(1e-6, 10),
	).Draw(t, "dt")
	meaning := rapid.SampledFrom([]scenarios.TrialMeaning{scenarios.OneTrial, scenarios.Segments, scenarios.FrozenRepeats}).Draw(t, "trials")
	spec := scenarios.Spec{Dt: dt, Trials: meaning}
	numbers := []int64{rapid.Int64Range(-3, 3).Draw(t, "number")}
	if meaning != scenarios.OneTrial {
		numbers = rapid.SliceOfNDistinct(rapid.Int64Range(-9, 1<<40), 2, 4, rapid.ID).Draw(t, "numbers")
	}
	n := rapid.IntRange(2, 12).Draw(t, "samples")
	total := 0
	for range numbers {
		if meaning == scenarios.Segments {
			n = rapid.IntRange(2, 12).Draw(t, "samples")
		}
		spec.TrialSamples = append(spec.TrialSamples, n)
		total += n
	}
	spec.TrialNumbers = numbers
	for _, name := range rapid.SliceOfNDistinct(names.Filter(func(s string) bool { return s != "trial" && s != "time_s" }), 1, 3, rapid.ID).Draw(t, "streams") {
		x := rapid.SliceOfN(rapid.Float64(), total, total).Draw(t, "samples")
		x[0], x[1] = 1, 2 // not constant
		if meaning == scenarios.FrozenRepeats {
			for i := range x {
				x[i] = x[i%n]
			}
		}
		spec.Streams = append(spec.Streams, scenarios.Stream{Name: name, Samples: x})
	}
	units := rapid.SliceOfNDistinct(names, 1, 5, rapid.ID).Draw(t, "units")
	labelled := rapid.Bool().Draw(t, "labelled")
	for range rapid.IntRange(1, 25).Draw(t, "spikes") {
		k := rapid.IntRange(0, len(numbers)-1).Draw(t, "trial")
		spec.Columns.Unit = append(spec.Columns.Unit, rapid.SampledFrom(units).Draw(t, "unit"))
		spec.Columns.Trial = append(spec.Columns.Trial, numbers[k])
		end := scenarios.Nanoseconds(float64(spec.TrialSamples[k]) * dt)
		spec.Columns.TimeNS = append(spec.Columns.TimeNS, rapid.Int64Range(0, end-1).Draw(t, "time"))
		if labelled {
			spec.Columns.Label = append(spec.Columns.Label, scenarios.EventLabel(rapid.IntRange(1, 3).Draw(t, "label")))
		}
	}
	spec.UnitCount = rapid.IntRange(len(units), len(units)+3).Draw(t, "declared")
	rec, err := scenarios.New(spec)
	require.NoError(t, err)
	return rec, Options{Units: spec.UnitCount, Trials: meaning}
}

// What is written reads back unchanged, from text and from an archive, with its
// rows in any order.
func TestWrittenRecordingsReadBack(t *testing.T) {
	dir := t.TempDir()
	rapid.Check(t, func(rt *rapid.T) {
		rec, opts := drawn(rt, rapid.Map(rapid.Int64Range(-5, 1<<40), func(n int64) string { return fmt.Sprint(n) }))
		require.NoError(rt, WriteCSV(dir, rec))
		text := Paths{Spikes: filepath.Join(dir, "spikes.csv"), Streams: filepath.Join(dir, "streams.csv")}
		got, err := Read(text, opts)
		require.NoError(rt, err)
		require.Equal(rt, rec, got)

		archive := filepath.Join(dir, "x.npz")
		require.NoError(rt, WriteNPZ(archive, rec))
		got, err = Read(Paths{Spikes: archive}, opts)
		require.NoError(rt, err)
		require.Equal(rt, rec, got)

		table, err := os.ReadFile(text.Spikes)
		require.NoError(rt, err)
		rows := strings.Split(strings.TrimSpace(string(table)), "\n")
		rand.New(rand.NewPCG(rapid.Uint64().Draw(rt, "shuffle"), 0)).Shuffle(len(rows)-1, func(i, j int) {
			rows[i+1], rows[j+1] = rows[j+1], rows[i+1]
		})
		require.NoError(rt, os.WriteFile(text.Spikes, []byte(strings.Join(rows, "\n")), 0o666))
		got, err = Read(text, opts)
		require.NoError(rt, err)
		require.Equal(rt, rec, got)
	})
}

// Names of any kind and the units' own limits pass through text.
func TestNamesAndLimitsReadBack(t *testing.T) {
	dir := t.TempDir()
	names := rapid.StringMatching(`[a-c0-9 ,"#é.\-]{1,4}`)
	rapid.Check(t, func(rt *rapid.T) {
		rec, opts := drawn(rt, names)
		units := rec.Units() // new in this test's own recording: may be given limits
		for i := range units {
			units[i].CellType = rapid.SampledFrom([]string{"", "pyramidal", "a,b"}).Draw(rt, "type")
			units[i].Condition = rapid.SampledFrom([]string{"", "light"}).Draw(rt, "condition")
			units[i].MaxISI = rapid.Int64Range(-1, 1e11).Draw(rt, "max")
			units[i].MinSilence = rapid.Int64Range(-1, 1e11).Draw(rt, "silence")
		}
		units[0].CellType = "named"
		require.NoError(rt, WriteCSV(dir, rec))
		got, err := Read(Paths{Spikes: filepath.Join(dir, "spikes.csv"), Streams: filepath.Join(dir, "streams.csv"), UnitsTable: filepath.Join(dir, "units.csv")}, opts)
		require.NoError(rt, err)
		require.Equal(rt, rec, got)
	})
}

func TestPseudoCellsReadBack(t *testing.T) {
	rec, fault := readTexts(t, "unit,time_s,trial\n10,0.1,11\n10,0.2,2\n9,0.1,2\n9,0.2,11\n9,0.2,3\n",
		"time_s,soma\n0,1\n0.1,2\n0.2,3\n", "", Options{Trials: scenarios.TrialsAsCells})
	require.Empty(t, fault)
	dir := t.TempDir()
	require.NoError(t, WriteCSV(dir, rec))
	again, err := Read(Paths{Spikes: filepath.Join(dir, "spikes.csv"), Streams: filepath.Join(dir, "streams.csv")}, Options{})
	require.NoError(t, err)
	require.Equal(t, rec.Units()[:5], again.Units(), "the silent one is not in the file")
	for u := range again.Units() {
		assert.Equal(t, rec.Train(nil, u, 0), again.Train(nil, u, 0))
	}
	assert.EqualError(t, WriteNPZ(filepath.Join(dir, "x.npz"), rec), dir+`/x.npz: unit "9#2": an .npz names units by whole numbers: write CSV instead`)
}

// An independent reader of the format sees the arrays that INTERFACE names.
func TestArchiveForAnotherReader(t *testing.T) {
	rec, err := Read(Paths{Spikes: filepath.Join(golden, "plain.npz")}, Options{})
	require.NoError(t, err)
	path := filepath.Join(t.TempDir(), "x.npz")
	require.NoError(t, WriteNPZ(path, rec))
	in, err := npz.Open(path)
	require.NoError(t, err)
	defer in.Close()
	assert.Equal(t, []string{"unit.npy", "time_s.npy", "dt_s.npy", "stream_soma.npy", "stream_dendrite.npy"}, in.Keys())
	var unit []int32
	var time, soma []float64
	var dt float64
	require.NoError(t, in.Read("unit.npy", &unit))
	require.NoError(t, in.Read("time_s.npy", &time))
	require.NoError(t, in.Read("dt_s.npy", &dt))
	require.NoError(t, in.Read("stream_soma.npy", &soma))
	assert.Equal(t, rec.Spikes(), len(unit))
	assert.Equal(t, scenarios.Seconds(rec.Train(nil, 0, 0)[0]), time[0])
	assert.Equal(t, rec.Dt(), dt)
	assert.Equal(t, rec.StreamSamples(0, 0), soma)
}

// broken is a source whose second stream has a name that cannot be written.
type broken struct{ *scenarios.Recording }

func (b broken) Streams() []scenarios.Stream {
	return []scenarios.Stream{b.Recording.Streams()[0], {Name: "trial"}}
}

func TestNothingHalfWritten(t *testing.T) {
	rec, fault := readTexts(t, goodSpikes, goodStreams, "", Options{})
	require.Empty(t, fault)
	dir := t.TempDir()
	assert.EqualError(t, WriteCSV(dir, broken{rec}), dir+`/streams.csv: a stream cannot be named "trial" here: rename it`)
	assert.Error(t, WriteNPZ(filepath.Join(dir, "x.npz"), rec))
	left, err := os.ReadDir(dir)
	require.NoError(t, err)
	assert.Empty(t, left)

	require.NoError(t, WriteCSV(dir, rec))
	got, err := os.ReadFile(filepath.Join(dir, "spikes.csv"))
	require.NoError(t, err)
	assert.Equal(t, goodSpikes, string(got))
	got, err = os.ReadFile(filepath.Join(dir, "streams.csv"))
	require.NoError(t, err)
	assert.Equal(t, goodStreams, string(got))
	left, err = os.ReadDir(dir)
	require.NoError(t, err)
	assert.Len(t, left, 2)
}
