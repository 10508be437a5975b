package files

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/scenarios"
)

const golden = "../../testdata/recordings"

// Every form of one recording reads as the same recording.
func TestContainersAgree(t *testing.T) {
	read := func(spikes, streams string) *scenarios.Recording {
		t.Helper()
		paths := Paths{Spikes: filepath.Join(golden, spikes)}
		if streams != "" {
			paths.Streams = filepath.Join(golden, streams)
		}
		rec, err := Read(paths, Options{Units: 13})
		require.NoError(t, err)
		return rec
	}
	want := read("spikes.csv", "streams.csv")
	assert.Equal(t, 12, len(want.Units())-1)
	assert.Equal(t, "12", want.Units()[12].Name, "the silent unit")
	assert.Equal(t, 2.0, want.DurationS())
	assert.Equal(t, 1.0/128, want.Dt())
	for _, spikes := range []string{"plain.npz", "deflated.npz", "big_endian.npz", "sorted.npz", "versions.npz"} {
		assert.Equal(t, want, read(spikes, ""), spikes)
	}
	assert.Equal(t, want, read("spikes.npz", "streams.npz"))
	assert.Equal(t, want, read("spikes.csv", "streams.csv.gz"))
	assert.Equal(t, want, read("plain.npz", "streams.csv"))
	assert.Equal(t, want, read("spikes.csv", "plain.npz"))

	single := read("single.npz", "")
	require.Len(t, single.Notes(), 2)
	assert.Equal(t, "times are float32: the latest are known to 0.00012 ms only", single.Notes()[0].Text)
	for u := range want.Units() {
		assert.Equal(t, want.Train(nil, u, 0), single.Train(nil, u, 0))
	}
}

func TestTextAsProgramsWriteIt(t *testing.T) {
	want, fault := readTexts(t, goodSpikes, goodStreams, "", Options{})
	require.Empty(t, fault)
	tests := []struct{ name, spikes, streams string }{
		{"CRLF", strings.ReplaceAll(goodSpikes, "\n", "\r\n"), strings.ReplaceAll(goodStreams, "\n", "\r\n")},
		{"byte-order mark", "\ufeff" + goodSpikes, "\ufeff" + goodStreams},
		{"gzip", zipped(goodSpikes), zipped("\ufeff" + goodStreams)},
		{"no last line end", strings.TrimSuffix(goodSpikes, "\n"), strings.TrimSuffix(goodStreams, "\n")},
		{"empty rows at the end", goodSpikes + "\n\r\n \n", goodStreams + "\n\n"},
		{"blanks", strings.ReplaceAll(goodSpikes, ",", " ,\t "), strings.ReplaceAll(goodStreams, ",", ", ")},
		{"quotes", "\"unit\",\"time_s\"\n\"a\",0.1\n\"a\" , \"0.25\"\n\"b\",0.3\nb,0.35\n", goodStreams},
		{"other columns first", "time_s,unit\n0.1,a\n0.25,a\n0.3,b\n0.35,b\n", "soma,time_s,dendrite\n1,0,2\n2,0.1,1\n1,0.2,3\n0,0.3,2\n"},
		{"other digits", "unit,time_s\na,1e-1\na,+.25\nb,0.30000000000000001\nb,35.0E-2\n", goodStreams},
		{"shuffled", "unit,time_s\nb,0.35\na,0.25\nb,0.3\na,0.1\n", goodStreams},
		{"later clock", "unit,time_s\na,7.1\na,7.25\nb,7.3\nb,7.35\n", "time_s,soma,dendrite\n7,1,2\n7.1,2,1\n7.2,1,3\n7.3,0,2\n"},
		{"earlier clock", "unit,time_s\na,-0.9\na,-0.75\nb,-0.7\nb,-0.65\n", "time_s,soma,dendrite\n-1,1,2\n-0.9,2,1\n-0.8,1,3\n-0.7,0,2\n"},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			got, fault := readTexts(t, test.spikes, test.streams, "", Options{})
			require.Empty(t, fault)
			assert.Equal(t, want, got)
		})
	}
}

func TestQuotedNames(t *testing.T) {
	rec, fault := readTexts(t, "unit,time_s\n\"a, \"\"left\"\"\",0.1\n\" b\",0.2\n", goodStreams, "", Options{})
	require.Empty(t, fault)
	assert.Equal(t, " b", rec.Units()[0].Name)
	assert.Equal(t, `a, "left"`, rec.Units()[1].Name)
}

func TestUnitsTable(t *testing.T) {
	rec, fault := readTexts(t, goodSpikes, goodStreams,
		"unit,cell_type,min_silence_ms,max_isi_ms\nb,pyramidal,,7.5\nz,basket,100,\n", Options{Units: 4})
	require.Empty(t, fault)
	assert.Equal(t, []scenarios.Unit{
		scenarios.NewUnit("a"),
		{Name: "b", CellType: "pyramidal", MaxISI: 7_500_000, FirstISI: -1, MinSilence: -1},
		scenarios.NewUnit("silent-1"),
		{Name: "z", CellType: "basket", MaxISI: -1, FirstISI: -1, MinSilence: 100_000_000},
	}, rec.Units())
}

func TestTrialsInText(t *testing.T) {
	rec, fault := readTexts(t, trialSpikes, trialStreams, "", Options{})
	require.Empty(t, fault)
	assert.Equal(t, scenarios.Segments, rec.Meaning())
	assert.Equal(t, []scenarios.Trial{{Number: 1, Duration: 3e8, Samples: 3}, {Number: 2, Duration: 3e8, Samples: 3}}, rec.Trials())
	assert.Equal(t, []int64{2.5e8}, rec.Train(nil, 0, 1))
	assert.Equal(t, []float64{4, 5, 7}, rec.StreamSamples(0, 1))

	// Trials in any order, each on a clock of its own, with numbers as a table
	// with gaps writes them.
	other, fault := readTexts(t, "trial,unit,time_s\n2.0,a,100.25\n1.0,a,0.1\n2.0,b,100.2\n1.0,b,0.1\n",
		"time_s,soma,trial\n100,4,2\n100.1,5,2\n100.2,7,2\n0,1,1\n0.1,2,1\n0.2,3,1\n", "", Options{})
	require.Empty(t, fault)
	assert.Equal(t, rec, other)

	frozen, fault := readTexts(t, trialSpikes, sameStreams, "", Options{Trials: scenarios.FrozenRepeats})
	require.Empty(t, fault)
	shared, fault := readTexts(t, trialSpikes, "time_s,soma\n0,1\n0.1,2\n0.2,3\n", "", Options{Trials: scenarios.FrozenRepeats})
	require.Empty(t, fault)
	assert.Equal(t, frozen, shared)
	assert.Equal(t, []float64{1, 2, 3}, shared.StreamSamples(0, 1))
}

func TestEventsInText(t *testing.T) {
	rec, fault := readTexts(t, "unit,event,time_s\na,inner,0.11\na,first,0.1\nb,single,0.2\n", goodStreams, "", Options{})
	require.Empty(t, fault)
	assert.Equal(t, []scenarios.EventLabel{scenarios.FirstSpike, scenarios.InnerSpike}, rec.Labels(0, 0))
	assert.Equal(t, []scenarios.EventLabel{scenarios.SingleSpike}, rec.Labels(1, 0))
}

// A table of many blocks reads the same with any number of workers, and faults
// keep their row.
func TestBlocks(t *testing.T) {
	const rows = 200_000
	var table strings.Builder
	table.WriteString("unit,time_s\n")
	for i := range rows {
		table.WriteString([]string{"17", "4", "cell-with-a-long-name"}[i%3])
		table.WriteByte(',')
		table.Write(appendSeconds(nil, int64(i)*1500))
		table.WriteByte('\n')
	}
	one, fault := readTexts(t, table.String(), goodStreams, "", Options{Workers: 1})
	require.Empty(t, fault)
	assert.Equal(t, rows, one.Spikes())
	assert.Equal(t, int64(1500*(rows-1)), one.Train(nil, 1, 0)[(rows-1)/3])
	for _, workers := range []int{2, 7} {
		many, fault := readTexts(t, table.String(), goodStreams, "", Options{Workers: workers})
		require.Empty(t, fault)
		assert.Equal(t, one, many)
		_, fault = readTexts(t, table.String()+"4,x\n4,y\n", goodStreams, "", Options{Workers: workers})
		assert.Equal(t, `spikes.csv row 200002: time_s is "x": a number is needed`, fault)
		_, fault = readTexts(t, table.String()+"\n4,0.1\n", goodStreams, "", Options{Workers: workers})
		assert.Equal(t, `spikes.csv row 200002: the row is empty: remove it`, fault)
		_, fault = readTexts(t, table.String()+"4,9\n", goodStreams, "", Options{Workers: workers})
		assert.Contains(t, fault, `spikes.csv row 200002: unit "4" spikes at 9 s, outside`)
	}
}

func TestPaths(t *testing.T) {
	dir := t.TempDir()
	good := filepath.Join(dir, "spikes.csv")
	require.NoError(t, os.WriteFile(good, []byte(goodSpikes), 0o666))
	require.NoError(t, os.Mkdir(filepath.Join(dir, "folder.csv"), 0o777))
	require.NoError(t, os.Mkdir(filepath.Join(dir, "folder"), 0o777))
	tests := []struct {
		paths Paths
		want  string
	}{
		{Paths{}, "no file of spikes: name a .csv or .npz file"},
		{Paths{Spikes: good}, "DIR/spikes.csv: no file of streams beside it: name one (only an .npz can hold both)"},
		{Paths{Spikes: good, Streams: dir + "/absent.csv"}, "DIR/absent.csv: no such file: check the path, which counts from the study file"},
		{Paths{Spikes: dir + "/absent.npz"}, "DIR/absent.npz: no such file: check the path, which counts from the study file"},
		{Paths{Spikes: good, Streams: dir + "/folder.csv"}, "DIR/folder.csv: is a folder: name a file in it"},
		{Paths{Spikes: dir + "/folder", Streams: good}, "DIR/folder: is a folder: name a file in it"},
		{Paths{Spikes: dir + "/spikes.mat", Streams: good}, `DIR/spikes.mat: cannot read ".mat" files; .csv and .npz can be read`},
		{Paths{Spikes: dir + "/spikes", Streams: good}, `DIR/spikes: cannot read files without an extension; .csv and .npz can be read`},
		{Paths{Spikes: filepath.Join(golden, "spikes.csv"), Streams: filepath.Join(golden, "streams.csv"), UnitsTable: "units.npz"},
			`units.npz: cannot read ".npz" as a units table; .csv can be read`},
	}
	for _, test := range tests {
		_, err := Read(test.paths, Options{})
		require.Error(t, err)
		assert.Equal(t, test.want, strings.ReplaceAll(err.Error(), dir, "DIR"))
	}
}
