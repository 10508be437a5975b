package scenarios

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"codeassay/estimators"
)

// small is a recording of 1 s with spikes of three units, unsorted.
func small() Spec {
	return Spec{
		Streams: []Stream{{Name: "soma", Measure: "pA", BandHz: 20, Samples: []float64{1, 2, 3, 4, 5, 4, 3, 2, 1, 0}}},
		Dt:      0.1,
		Columns: SpikeColumns{
			Index: []int{10, 9, 10, 9, 9, 100},
			TimeS: []float64{0.5, 0.25, 0.1, 0.3, 0.35, 0.9},
		},
	}
}

// trials splits the streams of small into two trials with different input.
func trials() Spec {
	s := small()
	s.TrialSamples = []int{4, 6}
	s.TrialNumbers = []int64{7, 3}
	s.Columns.Trial = []int64{3, 7, 7, 3, 7, 3}
	s.Columns.TimeS[5] = 0.55
	return s
}

func repeats(meaning TrialMeaning) Spec {
	s := trials()
	s.TrialSamples = []int{5, 5}
	s.Streams[0].Samples = []float64{1, 2, 3, 4, 5, 1, 2, 3, 4, 5}
	s.Columns.TimeS = []float64{0.4, 0.25, 0.1, 0.3, 0.35, 0.45}
	s.Trials = meaning
	return s
}

func TestOneTrial(t *testing.T) {
	rec, err := New(small())
	require.NoError(t, err)
	assert.Equal(t, OneTrial, rec.Meaning())
	assert.Equal(t, []Unit{NewUnit("9"), NewUnit("10"), NewUnit("100")}, rec.Units())
	assert.Equal(t, []Trial{{Duration: 1e9, Samples: 10}}, rec.Trials())
	assert.Equal(t, []int64{2.5e8, 3e8, 3.5e8}, rec.Train(nil, 0, 0))
	assert.Equal(t, []int64{1e8, 5e8}, rec.Train(nil, 1, 0))
	assert.Nil(t, rec.Labels(0, 0))
	assert.Equal(t, 6, rec.Spikes())
	assert.Equal(t, 1.0, rec.DurationS())
	assert.Equal(t, 0.1, rec.Dt())
	assert.Equal(t, small().Streams, rec.Streams())
	assert.False(t, rec.PseudoCells())
	assert.Equal(t, []estimators.Warning{{Severity: estimators.Note, About: "units",
		Text: `1 of 3 units have a single spike (the first is "100")`, Remedy: "leave such units out or record longer"}}, rec.Notes())
	assert.Panics(t, func() { rec.Train(nil, 0, 1) }, "no such trial")
}

func TestTrialsByNumber(t *testing.T) {
	rec, err := New(trials())
	require.NoError(t, err)
	assert.Equal(t, Segments, rec.Meaning())
	assert.Equal(t, []Trial{{Number: 3, Duration: 6e8, Samples: 6}, {Number: 7, Duration: 4e8, Samples: 4}}, rec.Trials())
	assert.Equal(t, []float64{5, 4, 3, 2, 1, 0}, rec.StreamSamples(0, 0))
	assert.Equal(t, []float64{1, 2, 3, 4}, rec.StreamSamples(0, 1))
	assert.Equal(t, []int64{3e8}, rec.Train(nil, 0, 0))
	assert.Equal(t, []int64{2.5e8, 3.5e8}, rec.Train(nil, 0, 1))
	assert.Equal(t, 1.0, rec.DurationS())
}

func TestStartsOfTrials(t *testing.T) {
	s := trials()
	s.StartS = []float64{100, -5}
	for i, trial := range s.Columns.Trial {
		s.Columns.TimeS[i] += map[int64]float64{7: 100, 3: -5}[trial]
	}
	late, err := New(s)
	require.NoError(t, err)
	want, err := New(trials())
	require.NoError(t, err)
	assert.Equal(t, want, late)
}

func TestTrialsAsCells(t *testing.T) {
	rec, err := New(repeats(TrialsAsCells))
	require.NoError(t, err)
	assert.True(t, rec.PseudoCells())
	var names []string
	for _, u := range rec.Units() {
		names = append(names, u.Name)
	}
	assert.Equal(t, []string{"9#3", "9#7", "10#3", "10#7", "100#3", "100#7"}, names, "the last one is silent")
	assert.Equal(t, []Trial{{Duration: 5e8, Samples: 5}}, rec.Trials())
	assert.Equal(t, []float64{1, 2, 3, 4, 5}, rec.Streams()[0].Samples)
	assert.Equal(t, []int64{2.5e8, 3.5e8}, rec.Train(nil, 1, 0))
	assert.Equal(t, estimators.Warning{Severity: estimators.Note, About: "trials",
		Text:   "2 trials of each unit are read as so many cells: they share no noise by construction, so values for large ensembles are optimistic",
		Remedy: "record cells together to learn how much noise they share"}, rec.Notes()[0])
}

func TestFrozenRepeats(t *testing.T) {
	rec, err := New(repeats(FrozenRepeats))
	require.NoError(t, err)
	assert.Equal(t, FrozenRepeats, rec.Meaning())
	assert.Len(t, rec.Units(), 3)
	assert.Equal(t, []float64{1, 2, 3, 4, 5}, rec.Streams()[0].Samples)
	for trial := range rec.Trials() {
		assert.Equal(t, []float64{1, 2, 3, 4, 5}, rec.StreamSamples(0, trial))
	}
	assert.Equal(t, []int64{2.5e8, 3.5e8}, rec.Train(nil, 0, 1))

	cut := repeats(FrozenRepeats)
	cut.TrialSamples = []int{4, 6}
	cut.Streams[0].Samples = []float64{1, 2, 3, 4, 1, 2, 3, 4, 5, 6}
	_, err = New(cut)
	assert.EqualError(t, err, `streams: trials = "frozen-repeats" needs trials of one length, they have 4 to 6 samples: set duration_s = 0.4`)
	cut.DurationS, cut.DropOutside = 0.4, true
	rec, err = New(cut)
	require.NoError(t, err)
	assert.Equal(t, 2, rec.Dropped())
	assert.Equal(t, []float64{1, 2, 3, 4}, rec.StreamSamples(0, 1))
}

func TestNotes(t *testing.T) {
	spec := small()
	spec.Notes = []estimators.Warning{{Text: "of the file"}}
	spec.Columns = SpikeColumns{
		Unit:  []string{"b", "b", "a", "b", "a", "a", "c"},
		TimeS: []float64{0.2, 0.2, 0.1, 2, 0.1, 0.3, -1},
		Label: []EventLabel{FirstSpike, InnerSpike, SingleSpike, FirstSpike, InnerSpike, FirstSpike, FirstSpike},
	}
	spec.DropOutside, spec.UnitCount, spec.Trials = true, 5, FrozenRepeats
	rec, err := New(spec)
	require.NoError(t, err)
	assert.Equal(t, 2, rec.Dropped())
	var names []string
	for _, u := range rec.Units() {
		names = append(names, u.Name)
	}
	assert.Equal(t, []string{"a", "b", "c", "silent-1", "silent-2"}, names)
	var texts []string
	for _, w := range rec.Notes() {
		texts = append(texts, string(w.Severity)+" "+w.Text)
	}
	assert.Equal(t, []string{
		" of the file",
		"warning 2 spikes outside the recording left out, 5 kept",
		`note trials = "frozen-repeats" has no effect on a recording of one trial`,
		"note 3 of 5 units are silent",
		`warning 2 spikes are at the very time of another of the same unit (2 units, the first is "a")`,
		`warning 1 spike is labelled "inner" without a burst's "first" before it`,
	}, texts)

	same := repeats(Segments)
	same.Columns.Trial = []int64{3, 3, 3, 3, 3, 3}
	rec, err = New(same)
	require.NoError(t, err)
	require.Len(t, rec.Notes(), 3)
	assert.Equal(t, "the streams are the same in all 2 trials, yet these are read as segments with a new input each: intervals will be too narrow", rec.Notes()[0].Text)
	assert.Equal(t, "no unit spikes in 1 of 2 trials (7)", rec.Notes()[1].Text)
}

func TestOrderOfUnits(t *testing.T) {
	for _, test := range []struct{ names, want []string }{
		{[]string{"10", "9", "2.5", "-1"}, []string{"-1", "2.5", "9", "10"}},
		{[]string{"10", "9", "07", "7"}, []string{"07", "7", "9", "10"}},
		{[]string{"10", "9", "x"}, []string{"10", "9", "x"}},
		{[]string{"10", "9", "nan"}, []string{"10", "9", "nan"}},
		{[]string{"b", "B", "é", "a#2", "a#10"}, []string{"B", "a#10", "a#2", "b", "é"}},
		{[]string{"b#2", "a#10", "a#9"}, []string{"a#9", "a#10", "b#2"}},
		{[]string{"10#1", "9#10", "9#2"}, []string{"9#2", "9#10", "10#1"}},
	} {
		spec := small()
		spec.Columns = SpikeColumns{Unit: test.names}
		for i := range test.names {
			spec.Columns.TimeS = append(spec.Columns.TimeS, float64(i)/10)
		}
		rec, err := New(spec)
		require.NoError(t, err)
		var got []string
		for _, u := range rec.Units() {
			got = append(got, u.Name)
		}
		assert.Equal(t, test.want, got)
	}
}

func TestNamesOfSilentUnits(t *testing.T) {
	for _, test := range []struct {
		spiking []string
		count   int
		want    []string
	}{
		{[]string{"0", "2"}, 4, []string{"1", "3"}},
		{[]string{"1", "4"}, 4, []string{"2", "3"}},
		{[]string{"0", "4"}, 4, []string{"silent-1", "silent-2"}},
		{[]string{"5", "2"}, 4, []string{"silent-1", "silent-2"}},
		{[]string{"-1"}, 2, []string{"silent-1"}},
		{[]string{"01"}, 2, []string{"silent-1"}},
		{[]string{"silent-1"}, 2, []string{"silent-2"}},
	} {
		assert.Equal(t, append(slices.Clone(test.spiking), test.want...), addSilent(test.spiking, test.count))
	}
}

func TestFaultsOfSpecs(t *testing.T) {
	for _, test := range []struct {
		name  string
		spoil func(*Spec)
		want  string
	}{
		{"no stream", func(s *Spec) { s.Streams = nil }, "streams: no stream: at least one signal that drove the cells is needed"},
		{"times missing", func(s *Spec) { s.Columns.TimeS = nil }, "spikes: 6 units but 0 times: one a spike is needed"},
		{"labels missing", func(s *Spec) { s.Columns.Label = make([]EventLabel, 2) }, "spikes: 6 units but 2 labels: one a spike is needed"},
		{"no spikes", func(s *Spec) { s.Columns = SpikeColumns{} }, "spikes: no spikes"},
		{"stream twice", func(s *Spec) { s.Streams = append(s.Streams, s.Streams[0]) }, `streams: two streams are named "soma": rename one`},
		{"some trials", func(s *Spec) { s.Columns.Trial = []int64{1, NoTrial, 1, 1, 1, 1} }, "spikes row 1: the spike has no trial, others have: number all of them"},
		{"samples of trials", func(s *Spec) { s.TrialSamples = []int{3, 3} }, "streams: the trials' samples [3 3] do not add up to the streams' 10"},
		{"trial twice", func(s *Spec) { s.TrialSamples, s.TrialNumbers = []int{5, 5}, []int64{1, 1} }, "streams: trial 1 appears twice: its samples must follow each other"},
		{"endless trial", func(s *Spec) { s.Dt = 1e6 }, "streams: a trial of 1e+07 s is longer than 11 days: split it, or correct the sample interval of 1e+06 s"},
		{"start", func(s *Spec) { s.StartS = []float64{5e9} }, "streams: the start time is 5e+09, above 4e9 s (126 years): write seconds"},
	} {
		t.Run(test.name, func(t *testing.T) {
			spec := small()
			test.spoil(&spec)
			_, err := New(spec)
			assert.EqualError(t, err, test.want)
		})
	}
}

func TestNearest(t *testing.T) {
	assert.Equal(t, "time_s", Nearest("Times", []string{"unit", "time_s", "trial"}))
	assert.Equal(t, "", Nearest("voltage", []string{"unit", "time_s", "trial"}))
}

// drawSpikes is a spike table whose rows are in no order, and the trains that it
// holds, found the slow and obvious way.
func drawSpikes(t *rapid.T) (SpikeColumns, map[SpikeKey][]int64) {
	var c SpikeColumns
	trains := map[SpikeKey][]int64{}
	for range rapid.IntRange(1, 80).Draw(t, "spikes") {
		unit, trial := rapid.IntRange(0, 4).Draw(t, "unit"), rapid.Int64Range(0, 2).Draw(t, "trial")
		time := rapid.Int64Range(0, 99).Draw(t, "time")
		c.Index, c.Trial, c.TimeNS = append(c.Index, unit), append(c.Trial, trial), append(c.TimeNS, time)
		key := SpikeKey{fmt.Sprint(unit), trial}
		trains[key] = append(trains[key], time)
	}
	return c, trains
}

// However rows are cut into batches and ordered, the trains are the same, and
// the columns are left as they were.
func TestTrainsAgainstOracle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		columns, trains := drawSpikes(t)
		spec := Spec{
			Dt: 2e-8, Streams: []Stream{{Name: "x", Samples: []float64{1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13, 14, 15}}},
			TrialSamples: []int{5, 5, 5}, Columns: columns,
		}
		before := fmt.Sprint(columns, spec.Streams)
		rec, err := New(spec)
		require.NoError(t, err)
		assert.Equal(t, before, fmt.Sprint(columns, spec.Streams))
		for u, unit := range rec.Units() {
			for k, trial := range rec.Trials() {
				want := trains[SpikeKey{unit.Name, trial.Number}]
				slices.Sort(want)
				assert.Equal(t, fmt.Sprint(want), fmt.Sprint(rec.Train(nil, u, k)))
			}
		}

		order := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "order"), 0)).Perm(len(columns.Index))
		if rapid.Bool().Draw(t, "sorted") {
			slices.SortFunc(order, func(a, b int) int {
				return slices.Compare(
					[]int64{int64(columns.Index[a]), columns.Trial[a], columns.TimeNS[a]},
					[]int64{int64(columns.Index[b]), columns.Trial[b], columns.TimeNS[b]})
			})
		}
		cut := rapid.IntRange(0, len(order)).Draw(t, "cut")
		spec.Columns, spec.Batches = SpikeColumns{}, nil
		for _, rows := range [][]int{order[:cut], order[cut:]} {
			var c SpikeColumns
			for _, i := range rows {
				c.Index, c.Trial, c.TimeNS = append(c.Index, columns.Index[i]), append(c.Trial, columns.Trial[i]), append(c.TimeNS, columns.TimeNS[i])
			}
			batch, err := c.batch("")
			require.NoError(t, err)
			spec.Batches = append(spec.Batches, batch)
		}
		if cut == 0 {
			spec.Batches = spec.Batches[1:]
		}
		again, err := New(spec)
		require.NoError(t, err)
		assert.Equal(t, rec, again)
	})
}

// A batch that is in order already becomes the recording's own memory.
func TestSortedBatchIsNotCopied(t *testing.T) {
	spec := small()
	spec.Columns = SpikeColumns{}
	times := []int64{1e8, 2e8, 5e7, 3e8}
	spec.Batches = []SpikeBatch{{Keys: []SpikeKey{{"1", NoTrial}, {"2", NoTrial}}, Runs: []SpikeRun{{0, 2}, {1, 2}}, Times: times}}
	rec, err := New(spec)
	require.NoError(t, err)
	assert.Same(t, &times[0], &rec.Train(nil, 0, 0)[0])
	assert.Panics(t, func() {
		spec.Batches = []SpikeBatch{{Keys: []SpikeKey{{"1", NoTrial}}, Runs: []SpikeRun{{0, 2}}, Times: times}}
		_, _ = New(spec)
	}, "a batch whose columns differ in length")
}

func TestMakeLarge(t *testing.T) {
	for _, n := range []int{0, 1, largeLength, largeLength + 12345} {
		s := MakeLarge[uint16](n)
		require.Len(t, s, n)
		for i := range s {
			if s[i] != 0 {
				t.Fatal("not zero")
			}
			s[i] = 1
		}
	}
}
