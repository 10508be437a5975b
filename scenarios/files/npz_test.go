package files

import (
	"archive/zip"
	"bytes"
	"compress/flate"
	"encoding/binary"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"codeberg.org/sbinet/npyio/npz"
	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/scenarios"
)

// npy is an array file with the given header dictionary and elements.
func npy(header string, elements any) []byte {
	var b bytes.Buffer
	b.WriteString("\x93NUMPY\x01\x00")
	binary.Write(&b, binary.LittleEndian, uint16(len(header)))
	b.WriteString(header)
	binary.Write(&b, binary.LittleEndian, elements)
	return b.Bytes()
}

func vector(descr string, n int64, elements any) []byte {
	return npy(fmt.Sprintf("{'descr': '%s', 'fortran_order': False, 'shape': (%d,), }\n", descr, n), elements)
}

type entry struct {
	name string
	data []byte
}

// goodArrays is a recording, array by array.
func goodArrays() []entry {
	return []entry{
		{"unit", vector("<i4", 3, []int32{0, 1, 0})},
		{"time_s", vector("<f8", 3, []float64{0.1, 0.2, 0.3})},
		{"dt_s", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (), }\n", 0.1)},
		{"stream_soma", vector("<f8", 4, []float64{1, 2, 3, 2})},
	}
}

// with replaces an array, or adds it; without data it is left out.
func with(name string, data []byte) []entry {
	all := goodArrays()
	for i := range all {
		if all[i].name == name {
			if data == nil {
				return append(all[:i:i], all[i+1:]...)
			}
			all[i].data = data
			return all
		}
	}
	return append(all, entry{name, data})
}

func pack(method uint16, arrays []entry) []byte {
	var b bytes.Buffer
	w := zip.NewWriter(&b)
	for _, a := range arrays {
		out, _ := w.CreateHeader(&zip.FileHeader{Name: a.name + ".npy", Method: method})
		out.Write(a.data)
	}
	w.Close()
	return b.Bytes()
}

func readArchive(t *testing.T, data []byte) string {
	t.Helper()
	dir := t.TempDir()
	path := filepath.Join(dir, "x.npz")
	require.NoError(t, os.WriteFile(path, data, 0o666))
	var faults [2]string
	for i := range faults {
		if _, err := Read(Paths{Spikes: path}, Options{Workers: i + 1}); err != nil {
			faults[i] = strings.ReplaceAll(err.Error(), dir+"/", "")
		}
	}
	assert.Equal(t, faults[0], faults[1])
	return faults[0]
}

func TestFaultsOfArchives(t *testing.T) {
	require.Empty(t, readArchive(t, pack(zip.Store, goodArrays())))
	require.Empty(t, readArchive(t, pack(zip.Deflate, goodArrays())))
	stored := pack(zip.Store, goodArrays())
	flipped := bytes.Clone(stored)
	flipped[bytes.Index(flipped, binary.LittleEndian.AppendUint64(nil, math.Float64bits(0.3)))] ^= 1
	arrays := func(name string, data []byte) []byte { return pack(zip.Store, with(name, data)) }
	header := func(text string) []byte { return npy(text, []float64{1, 2, 3}) }
	tests := []struct {
		name string
		data []byte
		want string
	}{
		{"empty", nil,
			`x.npz: the file is empty`},
		{"text", []byte(goodSpikes),
			`x.npz: not an .npz archive, or one cut off (zip: not a valid zip file): write it again with numpy.savez`},
		{"gzip", []byte(zipped(string(stored))),
			`x.npz: is compressed with gzip as a whole: unpack it (an .npz compresses its own arrays)`},
		{"cut off", stored[:len(stored)/2],
			`x.npz: not an .npz archive, or one cut off (zip: not a valid zip file): write it again with numpy.savez`},
		{"flipped bit", flipped,
			`x.npz: array "time_s" fails its checksum: the file is damaged`},
		{"no unit", arrays("unit", nil),
			`x.npz: no array "unit" (found ["time_s" "dt_s" "stream_soma"])`},
		{"no time", arrays("time_s", nil),
			`x.npz: no array "time_s" (found ["unit" "dt_s" "stream_soma"])`},
		{"no interval", arrays("dt_s", nil),
			`x.npz: no array "dt_s" (found ["unit" "time_s" "stream_soma"])`},
		{"no stream", arrays("stream_soma", nil),
			`x.npz: no array stream_NAME: add one for each signal that drove the cells`},
		{"other name", pack(zip.Store, append(with("time_s", nil), entry{"times", vector("<f8", 3, []float64{0.1, 0.2, 0.3})})),
			`x.npz: array "times" is not known (did you mean "time_s"?); expected unit, time_s, trial, event, dt_s, start_s, stream_trial and stream_NAME`},
		{"unknown array", arrays("spike_depth", vector("<f8", 1, []float64{1})),
			`x.npz: array "spike_depth" is not known; expected unit, time_s, trial, event, dt_s, start_s, stream_trial and stream_NAME`},
		{"array twice", pack(zip.Store, append(goodArrays(), goodArrays()[0])),
			`x.npz: two arrays are named "unit": rename one`},
		{"other length", arrays("time_s", vector("<f8", 2, []float64{1, 2})),
			`x.npz: array "time_s" has 2 elements, "unit" has 3: one a spike is needed`},
		{"streams of two lengths", arrays("stream_dendrite", vector("<f8", 3, []float64{1, 2, 3})),
			`x.npz: stream "dendrite" has 3 samples, "soma" has 4: all streams need the same length`},
		{"no spikes", pack(zip.Store, append(with("unit", vector("<i4", 0, []int32{}))[:1],
			append([]entry{{"time_s", vector("<f8", 0, []float64{})}}, goodArrays()[2:]...)...)),
			`x.npz: no spikes`},
		{"units of floats", arrays("unit", vector("<f8", 3, []float64{0, 1, 0})),
			`x.npz: array "unit" has floating-point elements (f8); integers are needed: write it with .astype(int)`},
		{"units of text", arrays("unit", npy("{'descr': '<U2', 'fortran_order': False, 'shape': (3,), }\n", make([]byte, 24))),
			`x.npz: array "unit" has elements of text (<U2); integers (i1 to u8) or floating-point numbers (f4, f8) are needed`},
		{"units of objects", arrays("unit", npy("{'descr': '|O', 'fortran_order': False, 'shape': (3,), }\n", make([]byte, 24))),
			`x.npz: array "unit" has elements of pickled objects; integers (i1 to u8) or floating-point numbers (f4, f8) are needed`},
		{"structured units", arrays("unit", npy("{'descr': [('a', '<i4')], 'fortran_order': False, 'shape': (3,), }\n", make([]byte, 12))),
			`x.npz: array "unit" has elements of type [('a', '<i4')]; plain integers or floating-point numbers are needed`},
		{"half floats", arrays("stream_soma", vector("<f2", 4, make([]uint16, 4))),
			`x.npz: array "stream_soma" has elements of type <f2; integers (i1 to u8) or floating-point numbers (f4, f8) are needed`},
		{"huge unit", arrays("unit", vector("<u8", 3, []uint64{0, 1 << 63, 0})),
			`x.npz: array "unit" is 9223372036854775808 at row 1: numbers up to 2^63−1 can be read`},
		{"two axes", arrays("stream_soma", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (2, 2), }\n", []float64{1, 2, 3, 4})),
			`x.npz: array "stream_soma" has shape (2, 2); one axis is needed`},
		{"NaN time", arrays("time_s", vector("<f8", 3, []float64{0.1, math.NaN(), 0.3})),
			`x.npz row 1: time_s is NaN: leave the row out or correct it`},
		{"infinite time", arrays("time_s", vector("<f4", 3, []float32{0.1, 0.2, float32(math.Inf(1))})),
			`x.npz row 2: time_s is +Inf: leave the row out or correct it`},
		{"time in nanoseconds", arrays("time_s", vector("<i8", 3, []int64{1e8, 2e8, 6e11})),
			`x.npz row 2: time_s is 6e+11, above 4e9 s (126 years): write seconds`},
		{"outside", arrays("time_s", vector("<f8", 3, []float64{0.1, 0.2, 0.4})),
			`x.npz row 2: unit "0" spikes at 0.4 s, outside the recording, which runs from 0 to 0.4 s (the only such spike): correct the times or the clock, or drop such spikes with drop_outside = true`},
		{"NaN in a stream", arrays("stream_soma", vector("<f8", 4, []float64{1, 2, math.NaN(), 2})),
			`x.npz: stream "soma" is NaN at sample 2: fill the gap or cut the recording`},
		{"constant stream", arrays("stream_soma", vector("<f8", 4, []float64{1, 1, 1, 1})),
			`x.npz: stream "soma" is constant (1) and so carries no information: leave it out or record what varied`},
		{"nameless stream", arrays("stream_", vector("<f8", 4, []float64{1, 2, 3, 2})),
			`x.npz: stream 2 has no name`},
		{"two intervals", arrays("dt_s", vector("<f8", 2, []float64{0.1, 0.1})),
			`x.npz: array "dt_s" has 2 elements: one number is needed`},
		{"no positive interval", arrays("dt_s", vector("<f8", 1, []float64{0})),
			`x.npz: the sample interval is 0 s: a nanosecond or more is needed`},
		{"unknown event", arrays("event", vector("|u1", 3, []uint8{1, 2, 4})),
			`x.npz: array "event" is 4 at row 2: 1 (first), 2 (inner) or 3 (single) is needed`},
		{"trial of another length", arrays("trial", vector("<i4", 2, []int32{1, 2})),
			`x.npz: array "trial" has 2 elements, "unit" has 3: one a spike is needed`},
		{"stream trial of another length", arrays("stream_trial", vector("<i4", 3, []int32{1, 1, 2})),
			`x.npz: array "stream_trial" has 3 elements, stream "soma" has 4: one a sample is needed`},
		{"scattered stream trial", arrays("stream_trial", vector("<i4", 4, []int32{1, 2, 2, 1})),
			`x.npz: array "stream_trial" goes back to trial 1 at row 3: the samples of a trial must follow each other`},
		{"starts without trials", arrays("start_s", vector("<f8", 2, []float64{0, 1})),
			`x.npz: array "start_s" has 2 elements, but there is no stream_trial to tell the trials apart`},
		{"starts for other trials", pack(zip.Store, append(with("start_s", vector("<f8", 3, []float64{0, 1, 2})),
			entry{"stream_trial", vector("<i4", 4, []int32{1, 1, 2, 2})}, entry{"trial", vector("<i4", 3, []int32{1, 1, 1})})),
			`x.npz: 3 start times for 2 trials: give one for all or one for each`},
		{"not an array", arrays("unit", []byte("0, 1, 0, and so on")),
			`x.npz: array "unit" is not a NumPy array`},
		{"no header", arrays("unit", []byte("\x93NUMPY")),
			`x.npz: array "unit" is cut off within its header`},
		{"header cut off", arrays("unit", []byte("\x93NUMPY\x01\x00\x40\x00{'descr'")),
			`x.npz: array "unit" is cut off within its header`},
		{"version 9", arrays("unit", []byte("\x93NUMPY\x09\x00\x00\x00\x00\x00")),
			`x.npz: array "unit" has NumPy format version 9; 1 to 3 can be read`},
		{"header of 4 GB", arrays("unit", []byte("\x93NUMPY\x02\x00\xff\xff\xff\xff{}")),
			`x.npz: array "unit" has a header of 4294967295 bytes, which no plain array needs`},
		{"empty header", arrays("unit", header("{}")),
			`x.npz: array "unit" has a damaged header: no descr`},
		{"no shape", arrays("unit", header("{'descr': '<f8', 'fortran_order': False, }")),
			`x.npz: array "unit" has a damaged header: no shape`},
		{"negative shape", arrays("unit", header("{'descr': '<f8', 'fortran_order': False, 'shape': (-3,), }")),
			`x.npz: array "unit" has an impossible shape (-3,)`},
		{"shape that overflows", arrays("unit", header("{'descr': '<i8', 'fortran_order': False, 'shape': (2305843009213693955,), }")),
			`x.npz: array "unit" has an impossible shape (2305843009213693955,)`},
		{"shape above the data", arrays("unit", header("{'descr': '<i8', 'fortran_order': False, 'shape': (4,), }")),
			`x.npz: array "unit" should take 99 bytes by its header, but takes 91: the file is damaged`},
		{"shape below the data", arrays("unit", header("{'descr': '<i8', 'fortran_order': False, 'shape': (2,), }")),
			`x.npz: array "unit" should take 83 bytes by its header, but takes 91: the file is damaged`},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			assert.Equal(t, test.want, readArchive(t, test.data))
		})
	}
}

// An entry that claims more than its bytes can hold is refused before any memory
// is asked for.
func TestImpossibleSizes(t *testing.T) {
	for _, test := range []struct {
		method uint16
		want   string
	}{
		{zip.Store, `x.npz: array "unit" claims an impossible size of 1099511627776 bytes: the file is damaged`},
		{zip.Deflate, `x.npz: array "unit" claims an impossible size of 1099511627776 bytes: the file is damaged`},
	} {
		var b bytes.Buffer
		w := zip.NewWriter(&b)
		data := vector("<i4", 1<<38, []int32{0})
		out, err := w.CreateRaw(&zip.FileHeader{Name: "unit.npy", Method: test.method, CompressedSize64: uint64(len(data)), UncompressedSize64: 1 << 40})
		require.NoError(t, err)
		out.Write(data)
		w.Close()
		assert.Equal(t, test.want, readArchive(t, b.Bytes()))
	}
}

// An entry that would expand 500-fold to 800 MB is refused at once; the ratio is
// possible, so only the claim can tell.
func TestArchiveThatExpands(t *testing.T) {
	const n = 100_000_000
	var b bytes.Buffer
	w := zip.NewWriter(&b)
	for _, v := range []struct {
		name, descr string
		size        int
	}{{"unit", "<i4", 4}, {"time_s", "<f8", 8}} {
		header := vector(v.descr, n, []byte{})
		var packed bytes.Buffer
		deflate, err := flate.NewWriter(&packed, flate.BestCompression)
		require.NoError(t, err)
		deflate.Write(header)
		deflate.Flush()
		size := uint64(len(header) + n*v.size)
		out, err := w.CreateRaw(&zip.FileHeader{Name: v.name + ".npy", Method: zip.Deflate, CompressedSize64: size / 500, UncompressedSize64: size})
		require.NoError(t, err)
		out.Write(append(packed.Bytes(), make([]byte, int(size/500)-packed.Len())...))
	}
	for _, a := range goodArrays()[2:] {
		out, err := w.Create(a.name + ".npy")
		require.NoError(t, err)
		out.Write(a.data)
	}
	w.Close()
	assert.Equal(t, `x.npz: array "time_s" would expand 499 times, to 800000076 bytes: write it uncompressed if that is meant`, readArchive(t, b.Bytes()))
}

// What an independent writer of the format makes is read.
func TestArchiveOfAnotherWriter(t *testing.T) {
	path := filepath.Join(t.TempDir(), "x.npz")
	require.NoError(t, npz.Write(path, map[string]any{
		"unit": []int64{3, 1, 3, 20}, "time_s": []float64{0.1, 0.25, 0.05, 0.2}, "dt_s": 0.1, "stream_soma": []float64{1, 2, 3, 2},
	}))
	rec, err := Read(Paths{Spikes: path}, Options{})
	require.NoError(t, err)
	assert.Equal(t, []int64{5e7, 1e8}, rec.Train(nil, 1, 0))
	assert.Equal(t, "20", rec.Units()[2].Name)
	assert.Equal(t, []float64{1, 2, 3, 2}, rec.StreamSamples(0, 0))
}

// Trials in archives: the streams' own array in one file, or a plain trial array
// in a file of streams alone.
func TestTrialsInArchives(t *testing.T) {
	dir := t.TempDir()
	put := func(name string, arrays ...entry) string {
		path := filepath.Join(dir, name)
		require.NoError(t, os.WriteFile(path, pack(zip.Store, arrays), 0o666))
		return path
	}
	all := goodArrays()
	trial := entry{"trial", vector("<i4", 3, []int32{8, 5, 5})}
	perSample := vector("<u2", 4, []uint16{8, 8, 5, 5})
	starts := entry{"start_s", vector("<f8", 2, []float64{0, 0.15})}
	one := put("one.npz", append(all, trial, starts, entry{"stream_trial", perSample})...)
	spikes := put("spikes.npz", all[0], all[1], trial)
	streams := put("streams.npz", all[2], all[3], starts, entry{"trial", perSample})

	rec, err := Read(Paths{Spikes: one}, Options{})
	require.NoError(t, err)
	assert.Equal(t, []int64{5, 8}, []int64{rec.Trials()[0].Number, rec.Trials()[1].Number})
	assert.Equal(t, []float64{3, 2}, rec.StreamSamples(0, 0))
	assert.Equal(t, []int64{1.5e8}, rec.Train(nil, 0, 0), "0.3 s on a clock that starts at 0.15 s")
	assert.Equal(t, []int64{5e7}, rec.Train(nil, 1, 0))
	assert.Equal(t, []int64{1e8}, rec.Train(nil, 0, 1))
	apart, err := Read(Paths{Spikes: spikes, Streams: streams}, Options{})
	require.NoError(t, err)
	assert.Equal(t, rec, apart)
}

// A column of units in no order, in trials in no order, against the runs found
// row by row.
func TestKeysAgainstOracle(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 3))
	const n = 200_000
	units, trials := make([]int64, n), make([]int64, n)
	for i := range units {
		units[i], trials[i] = rng.Int64N(3)*8192+rng.Int64N(4)-2, int64(i/20_000+i%2)
	}
	path := filepath.Join(t.TempDir(), "x.npz")
	require.NoError(t, os.WriteFile(path, pack(zip.Deflate, []entry{{"unit", vector("<i8", n, units)}, {"trial", vector("<i8", n, trials)}}), 0o666))
	a, err := openArchive(path)
	require.NoError(t, err)
	defer a.close()
	keys, runs, err := readKeys(a.arrays["unit"], a.arrays["trial"])
	require.NoError(t, err)
	row := 0
	for _, r := range runs {
		for range r.Count {
			want := scenarios.SpikeKey{Unit: fmt.Sprint(units[row]), Trial: trials[row]}
			if keys[r.Key] != want {
				t.Fatalf("row %d: %v, want %v", row, keys[r.Key], want)
			}
			row++
		}
	}
	assert.Equal(t, n, row)
}
