package bench

import (
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func TestParseOntoDefaults(t *testing.T) {
	s, err := Parse("study.toml", []byte(`
title = "mine"
[recording]
spikes = "a.csv"
streams = "b.csv"
[sweep]
codes = ["spike-rate"]
cells = [1, 16]
bands_hz = [20, [5, 40.5]]
[[code]]
name = "doublet-share"
weights = [0, 1, 0]
over = [1]
[estimate]
align = false
`))
	require.NoError(t, err)
	d := Defaults()
	assert.Equal(t, "mine", s.Title)
	assert.Equal(t, d.Seed, s.Seed)
	assert.Equal(t, d.Bursts, s.Bursts)
	assert.Equal(t, []Band{{0, 20}, {5, 40.5}}, s.Sweep.BandsHz)
	assert.Equal(t, []int{1, 16}, s.Sweep.Cells)
	assert.Equal(t, []string{"spike-rate", "doublet-share"}, s.Sweep.Codes, "a code of one's own is ranked unasked")
	assert.Empty(t, s.Sweep.Pairs, "the default pair needs its codes")
	assert.Equal(t, []CodePart{{Name: "doublet-share", Weights: []float64{0, 1, 0}, Over: []float64{1}}}, s.Codes)
	assert.False(t, s.Estimate.Align)
	assert.Equal(t, d.Estimate.With, s.Estimate.With)
	assert.True(t, s.Given("sweep.codes"))
	assert.False(t, s.Given("sweep.draws"))
	assert.True(t, s.Given("code.0.over"))
}

func TestPairsBringTheirCodes(t *testing.T) {
	s, err := Parse("study.toml", []byte("sweep = {codes = [\"spike-rate\"], pairs = [\"event-rate+burst-residual\"]}\nrecording.scenario = \"paired-drive\"\n"))
	require.NoError(t, err)
	assert.Equal(t, []string{"spike-rate", "event-rate", "burst-residual"}, s.Sweep.Codes)
	assert.Equal(t, []string{"event-rate+burst-residual"}, s.Sweep.Pairs)
	assert.Equal(t, 1024, s.Recording.Cells)
	assert.Equal(t, 300.0, s.Recording.DurationS)
	assert.Equal(t, Demo().Recording, s.Recording)

	s, err = Parse("study.toml", []byte("[recording]\nscenario = \"paired-drive\"\n[sweep]\npairs = []\n"))
	require.NoError(t, err)
	assert.Empty(t, s.Sweep.Pairs)
	assert.Equal(t, Defaults().Sweep.Codes, s.Sweep.Codes)
}

func TestPathsCountFromTheStudy(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "s.toml")
	require.NoError(t, os.WriteFile(path, []byte("\uFEFF[recording]\r\nspikes = \"x/a.csv\"\r\nstreams = \"/abs/b.csv\"\r\n"), 0o644))
	s, err := Load(path)
	require.NoError(t, err)
	assert.Equal(t, filepath.Join(dir, "x", "a.csv"), s.Recording.Spikes)
	assert.Equal(t, "/abs/b.csv", s.Recording.Streams)
	assert.Equal(t, "", s.Recording.UnitsTable)
}

// files and scenario are the first lines of studies that are right so far: the
// fault of a case stands in line 4.
const (
	files    = "[recording]\nspikes = \"s.csv\"\nstreams = \"t.csv\"\n"
	scenario = "[recording]\nscenario = \"paired-drive\"\n\n"
)

func TestWrongStudies(t *testing.T) {
	for _, c := range []struct{ name, text, want string }{
		{"syntax", files + "units 3", `study.toml:4: not valid TOML: expected '=' after key`},
		{"unclosed", files + "[sweep]\ncells = [1, 2\n", `study.toml:5: not valid TOML: array is incomplete`},
		{"twice", files + "units = 3\nunits = 4", `study.toml:5: not valid TOML: key units is already defined`},
		{"table twice", files + "[sweep]\n[sweep]", `study.toml:5: not valid TOML: table sweep already exists`},
		{"huge number", files + "units = 99999999999999999999", `study.toml:4: not valid TOML: decimal number is too large to fit in a 64-bit signed integer`},
		{"no recording", "[sweep]\ndraws = 3", `study.toml: [recording] names no recording: give spikes and streams, or scenario = "paired-drive"`},
		{"empty", "", `study.toml: [recording] names no recording: give spikes and streams, or scenario = "paired-drive"`},
		{"no scenario", "[recording]\ncells = 3", `study.toml:2: [recording] cells is a key of scenarios: add scenario = "paired-drive"`},

		{"unknown key", files + "[sweep]\ndraw = 3", `study.toml:5: [sweep] draw: unknown key; did you mean draws?`},
		{"unknown key on top", "titel = \"x\"", `study.toml:1: titel: unknown key; did you mean title?`},
		{"unlike any key", "[bursts]\nxyz = 1", `study.toml:2: [bursts] xyz: unknown key; there are max_isi_ms, min_spikes, first_isi_ms, min_silence_ms`},
		{"of another table", files + "[sweep]\nconfidence = 0.9", `study.toml:5: [sweep] confidence: unknown key; it belongs in [estimate]`},
		{"key below a table", files + "seed = 3", `study.toml:4: [recording] seed: unknown key; it belongs in the top, before any table`},
		{"key in a code", files + "[[code]]\nname = \"a\"\nweight = [1]", `study.toml:6: [[code]] weight: unknown key; did you mean weights?`},
		{"unknown table", "[sweeep]\n", `study.toml:1: [sweeep]: unknown table; did you mean [sweep]?`},
		{"table below a table", "[recording.files]\n", `study.toml:1: [recording.files]: unknown table; did you mean [recording]?`},
		{"dotted key", "sweep.draws.n = 3", `study.toml:1: sweep.draws.n: unknown key; did you mean [sweep]?`},
		{"table as a value", "sweep = 3", `study.toml:1: sweep is a table: write [sweep] on a line of its own, and its keys below`},
		{"code once", files + "[code]\nname = \"a\"", `study.toml:4: [code] is written [[code]]`},
		{"sweep as a list", files + "[[sweep]]", `study.toml:4: [[sweep]] is written [sweep]`},

		{"text for a number", files + "[sweep]\ndraws = \"20\"", `study.toml:5: [sweep] draws = "20": a whole number, 0 or above, is needed`},
		{"number with a point", files + "[sweep]\ndraws = 2.5", `study.toml:5: [sweep] draws = 2.5: a whole number, 0 or above, is needed`},
		{"below zero", files + "[sweep]\ndraws = -2", `study.toml:5: [sweep] draws = -2: a whole number, 0 or above, is needed`},
		{"number for a text", "title = 3", `study.toml:1: title = 3: text in quotes is needed`},
		{"text for a switch", files + "drop_outside = \"yes\"", `study.toml:4: [recording] drop_outside = "yes": true or false is needed`},
		{"one for a list", files + "[sweep]\ncells = 16", `study.toml:5: [sweep] cells = 16: a list of whole numbers, such as [1, 10] is needed`},
		{"mixed list", files + "[sweep]\ncodes = [\"spike-rate\", 2]", `study.toml:5: [sweep] codes = ["spike-rate", 2]: a list of texts in quotes, such as ["a", "b"] is needed`},
		{"band of three", files + "[sweep]\nbands_hz = [[1, 2, 3]]", `study.toml:5: [sweep] bands_hz = [[1, 2, 3]]: a list of upper edges or [low, high] pairs, such as [20, [5, 40]] is needed`},
		{"band of text", files + "[sweep]\nbands_hz = [\"20\"]", `study.toml:5: [sweep] bands_hz = ["20"]: a list of upper edges or [low, high] pairs, such as [20, [5, 40]] is needed`},
		{"not a number", files + "[sweep]\nbin_ms = nan", `study.toml:5: [sweep] bin_ms = nan: a finite number is needed`},
		{"infinite", files + "[bursts]\nmax_isi_ms = inf", `study.toml:5: [bursts] max_isi_ms = inf: a finite number is needed`},
		{"a date", files + "[sweep]\nbin_ms = 2020-01-01", `study.toml:5: [sweep] bin_ms = 2020-01-01: a number is needed`},

		{"both", scenario + "spikes = \"s.csv\"", `study.toml:4: [recording] spikes is a key of files, but scenario = "paired-drive" is given: keep one of the two`},
		{"cells of files", files + "cells = 12", `study.toml:4: [recording] cells is a key of scenarios, but spikes names a file: units declares how many were recorded, and [sweep] cells the ensemble sizes`},
		{"depth of files", files + "event_depth = 0.1", `study.toml:4: [recording] event_depth is a key of scenarios, but spikes names a file: leave it out`},
		{"spikes alone", "[recording]\nspikes = \"s.csv\"", `study.toml:2: [recording] spikes = "s.csv": streams has to name a file beside it (only an .npz holds both)`},
		{"no cells", scenario + "cells = 0\n[sweep]\ncells = [2000]", `study.toml:6: [sweep] cells = 2000: the scenario has 1024 cells`},
		{"trials", files + "trials = \"segment\"", `study.toml:4: [recording] trials = "segment": unknown meaning; did you mean segments?`},
		{"no time", files + "duration_s = 0.0", `study.toml:4: [recording] duration_s = 0: seconds above 0, up to 1e+07`},
		{"event rate", scenario + "event_rate_hz = -5.0", `study.toml:4: [recording] event_rate_hz = -5: events/s above 0, below 1000`},
		{"depth", scenario + "event_depth = 1.5", `study.toml:4: [recording] event_depth = 1.5: from 0 to below 1`},
		{"cut-off", scenario + "bandwidths_hz = [20, 0]", `study.toml:4: [recording] bandwidths_hz = 0: cut-offs are above 0 Hz`},

		{"no threshold", files + "[bursts]\nmax_isi_ms = 0", `study.toml:5: [bursts] max_isi_ms = 0: the longest interval within a burst must be above 0 (the usual is 15)`},
		{"bursts of one", files + "[bursts]\nmin_spikes = 1", `study.toml:5: [bursts] min_spikes = 1: a burst has at least 2 spikes`},
		{"looser first", files + "[bursts]\nfirst_isi_ms = 20", `study.toml:5: [bursts] first_isi_ms = 20 is longer than max_isi_ms = 15: the first interval can only be limited more strictly`},
		{"negative silence", files + "[bursts]\nmin_silence_ms = -1.5", `study.toml:5: [bursts] min_silence_ms = -1.5: milliseconds from 0 to 1e+09`},

		{"no draws", files + "[sweep]\n\n\ndraws = 0", `study.toml:7: [sweep] draws = 0: at least 1, at most 100000`},
		{"no code", files + "[sweep]\ncodes = []", `study.toml:5: [sweep] codes is empty: name at least one code`},
		{"code twice", files + "[sweep]\ncodes = [\"burst-rate\", \"burst-rate\"]", `study.toml:5: [sweep] codes = "burst-rate": this name stands twice`},
		{"pair of one", files + "[sweep]\npairs = [\"burst-rate\"]", `study.toml:5: [sweep] pairs = "burst-rate": two codes joined by +, such as "event-rate+burst-fraction"`},
		{"pair of three", files + "[sweep]\npairs = [\"a+b+c\"]", `study.toml:5: [sweep] pairs = "a+b+c": two codes joined by +, such as "event-rate+burst-fraction"`},
		{"pair of equals", files + "[sweep]\npairs = [\"a+a\"]", `study.toml:5: [sweep] pairs = "a+a": two different codes`},
		{"ensemble of none", files + "[sweep]\ncells = [0, 1]", `study.toml:5: [sweep] cells = 0: ensemble sizes are at least 1`},
		{"band edge", files + "[sweep]\nbands_hz = [0]", `study.toml:5: [sweep] bands_hz = 0: an upper edge is above 0 Hz`},
		{"band upside down", files + "[sweep]\nbands_hz = [[40, 20]]", `study.toml:5: [sweep] bands_hz = [40, 20]: a band is [low, high] with 0 ≤ low < high`},
		{"band twice", files + "[sweep]\nbands_hz = [20, [0, 20]]", `study.toml:5: [sweep] bands_hz = [0, 20]: this band stands twice`},
		{"input bandwidth of files", files + "[sweep]\ninput_bandwidths_hz = [10]", `study.toml:5: [sweep] input_bandwidths_hz draws streams anew, which only a scenario can: leave it out for files`},
		{"no bin", files + "[sweep]\nbin_ms = 0", `study.toml:5: [sweep] bin_ms = 0: milliseconds above 0, up to 1000`},
		{"odd bin", files + "[sweep]\nbin_ms = 0.3333333333", `study.toml:5: [sweep] bin_ms = 0.3333333333: a whole number of nanoseconds, at least 0.001 ms`},
		{"prior", files + "[sweep]\nfraction_prior = -1.0", `study.toml:5: [sweep] fraction_prior = -1: events, 0 (no shrinking) or more`},
		{"window", files + "[sweep]\nfraction_window_ms = -1.0", `study.toml:5: [sweep] fraction_window_ms = -1: from 0 (chosen) to 65535 bins`},

		{"code without a name", files + "[[code]]\nweights = [1]", `study.toml:4: [[code]] without a name: give it one`},
		{"code without weights", files + "[[code]]\nname = \"a\"", `study.toml:4: [[code]] a: weights has 0 numbers: give one to four, for events of 1, 2, 3 and ≥ 4 spikes (the last holds for longer ones)`},
		{"two codes of a name", files + "[[code]]\nname = \"a\"\nweights = [1]\n[[code]]\nname = \"a\"\nweights = [1]", `study.toml:8: [[code]] name = "a": this name stands twice`},

		{"no estimator", files + "[estimate]\nwith = []", `study.toml:5: [estimate] with is empty: name at least one estimator`},
		{"segment", files + "[estimate]\nsegment_ms = 8", `study.toml:5: [estimate] segment_ms = 8: at least 16 bins, 16 ms`},
		{"overlap", files + "[estimate]\noverlap = 1.0", `study.toml:5: [estimate] overlap = 1: a share of a segment from 0 to below 0.95`},
		{"shape", files + "[estimate]\nwindow = \"hamming\"", `study.toml:5: [estimate] window = "hamming": hann or boxcar`},
		{"half bandwidth", files + "[estimate]\nhalf_bandwidth = 0.5", `study.toml:5: [estimate] half_bandwidth = 0.5: from 1 to 64, or 0 to have it chosen`},
		{"per cent", files + "[estimate]\nconfidence = 95", `study.toml:5: [estimate] confidence = 95: from 0.5 to 0.9999`},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Parse("study.toml", []byte(c.text))
			require.Error(t, err)
			assert.Equal(t, c.want, err.Error())
			assert.NotContains(t, err.Error(), "\n")
		})
	}
}

func TestFilesThatAreNoStudies(t *testing.T) {
	dir := t.TempDir()
	write := func(name, text string) string {
		path := filepath.Join(dir, name)
		require.NoError(t, os.WriteFile(path, []byte(text), 0o644))
		return path
	}
	for path, want := range map[string]string{
		filepath.Join(dir, "none.toml"):                     "no such file",
		dir:                                                 "is a folder",
		write("spikes.csv", "unit,time_s\n"):                "is a recording, not a study",
		write("spikes.csv.gz", ""):                          "is a recording, not a study",
		write("spikes.txt", "unit,time_s\n1,2\n"):           "is a recording, not a study",
		write("long.toml", strings.Repeat("# x\n", 300000)): "is too long for a study",
	} {
		_, err := Load(path)
		var fault *Fault
		require.ErrorAs(t, err, &fault, path)
		assert.Equal(t, path+": "+want, err.Error())
	}
}

func TestLocate(t *testing.T) {
	s, err := Parse("study.toml", []byte(files+"[sweep]\ncells = [900]\n"))
	require.NoError(t, err)
	assert.EqualError(t, s.Locate(s.Fault("sweep.cells", "x")), "study.toml:5: x")
	assert.EqualError(t, s.Locate(assert.AnError), assert.AnError.Error())
	assert.NoError(t, s.Locate(nil))
	assert.EqualError(t, s.Locate(errorText("[sweep] cells = [900]: too many")), "study.toml:5: [sweep] cells = [900]: too many")
	assert.EqualError(t, s.Locate(errorText("[sweep] draws = 3: too few")), "[sweep] draws = 3: too few")
}

type errorText string

func (e errorText) Error() string { return string(e) }

// Keys is what help and messages show: it has to list what the types read.
func TestKeysListWhatAStudyReads(t *testing.T) {
	listed := map[string]KeyType{}
	for _, k := range Keys() {
		listed[k.Table+"."+k.Name] = k.Type
		assert.NotEmpty(t, k.Doc, k.Name)
	}
	read := map[string]KeyType{}
	var walk func(table string, of reflect.Type)
	walk = func(table string, of reflect.Type) {
		for i := range of.NumField() {
			f := of.Field(i)
			name := f.Tag.Get("toml")
			switch {
			case name == "" || name == "-":
			case f.Type.Kind() == reflect.Struct:
				walk(name, f.Type)
			case name == "code":
				walk(name, f.Type.Elem())
			default:
				read[table+"."+name] = map[string]KeyType{"string": Text, "int": Whole, "uint64": Whole, "float64": Number64, "bool": Switch,
					"[]string": Texts, "[]int": Wholes, "[]float64": Numbers, "[]interface {}": Bands}[f.Type.String()]
			}
		}
	}
	walk("", reflect.TypeFor[Study]())
	assert.Equal(t, read, listed)
}

func TestDemoIsAValidStudy(t *testing.T) {
	s := Demo()
	assert.NoError(t, s.Check())
}

func FuzzParse(f *testing.F) {
	f.Add(files + "[sweep]\nbands_hz = [20, [5, 40]]\n[[code]]\nname = \"a\"\nweights = [1]\n")
	f.Add(scenario)
	f.Add("sweep = {cells = [1], draws = 1e3}")
	f.Fuzz(func(t *testing.T, text string) {
		s, err := Parse("f", []byte(text))
		if err != nil {
			assert.IsType(t, &Fault{}, err)
			return
		}
		assert.NoError(t, s.Check())
	})
}
