package main

import (
	"bytes"
	"context"
	"encoding/json"
	"flag"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"codeassay/bench/catalog"
	"codeassay/bench/sweep"
)

var update = flag.Bool("update", false, "rewrite the golden files")

const (
	golden  = "../../testdata/cmd/"
	studies = "../../testdata/studies/"
)

// call runs the program and returns what it wrote.
func call(ctx context.Context, args ...string) (code int, stdout, stderr string) {
	var out, err bytes.Buffer
	code = run(ctx, args, strings.NewReader(""), &out, &err)
	return code, out.String(), err.String()
}

func mustCall(t *testing.T, args ...string) (stdout, stderr string) {
	t.Helper()
	code, stdout, stderr := call(t.Context(), args...)
	require.Zero(t, code, "%v: %s", args, stderr)
	return stdout, stderr
}

func compare(t *testing.T, name, got string) {
	t.Helper()
	path := golden + name
	if *update {
		require.NoError(t, os.MkdirAll(golden, 0o755))
		require.NoError(t, os.WriteFile(path, []byte(got), 0o644))
	}
	want, err := os.ReadFile(path)
	require.NoError(t, err, "go test ./cmd/codeassay -update writes it")
	assert.Equal(t, string(want), got, "go test ./cmd/codeassay -update rewrites %s", path)
}

// Golden output on standard output, nothing on standard error.
func TestGolden(t *testing.T) {
	small := studies + "small.toml"
	for _, c := range []struct {
		name    string
		columns string
		args    []string
	}{
		{"help.txt", "", []string{"--help"}},
		{"rank-help.txt", "", []string{"rank", "--help"}},
		{"simulate-help.txt", "", []string{"simulate", "--help"}},
		{"inspect-help.txt", "", []string{"inspect", "--help"}},
		{"inspect.txt", "", []string{"inspect", small}},
		{"inspect-narrow.txt", "44", []string{"inspect", small}},
		{"inspect.csv", "", []string{"inspect", "--quiet", "--format", "csv", small}},
		{"inspect.md", "", []string{"inspect", "--quiet", "--format", "markdown", small}},
		{"inspect.tex", "", []string{"inspect", "--quiet", "--format", "latex", small}},
	} {
		t.Run(c.name, func(t *testing.T) {
			t.Setenv("COLUMNS", c.columns)
			stdout, stderr := mustCall(t, c.args...)
			assert.Empty(t, stderr)
			assert.NotContains(t, stdout, "\x1b", "no colour where there is no terminal")
			compare(t, c.name, stdout)
			width := plainWidth
			if c.columns != "" {
				width = 44
			}
			if strings.HasSuffix(c.name, ".txt") {
				for _, line := range strings.Split(stdout, "\n") {
					assert.LessOrEqual(t, len([]rune(line)), width, line)
				}
			}
		})
	}
}

func TestWrongUsage(t *testing.T) {
	dir := t.TempDir()
	write := func(name, text string) string {
		path := filepath.Join(dir, name)
		require.NoError(t, os.WriteFile(path, []byte(text), 0o644))
		return path
	}
	there := filepath.Join(dir, "there")
	require.NoError(t, os.MkdirAll(there, 0o755))
	write("there/truth.json", "{}")
	files := "[recording]\nspikes = \"s.csv\"\nstreams = \"t.csv\"\n"
	good := write("good.toml", "[recording]\nscenario = \"paired-drive\"\ncells = 4\nduration_s = 20\n")
	write("s.csv", "unit,time_s\na,1\nb,2\n")
	write("t.csv", "time_s,x\n0,1\n0.5,2\n0.7,3\n")
	small := func(name string) string { return studies + name }

	for _, c := range []struct {
		name   string
		args   []string
		code   int
		stderr string // the start of it
	}{
		{"command", []string{"rnak"}, 2, "codeassay: unknown command \"rnak\"\nDid you mean codeassay rank?\n"},
		{"no command", []string{"bogus"}, 2, "codeassay: unknown command \"bogus\"\nThere are help, inspect, rank, simulate; codeassay --help says more.\n"},
		{"later command", []string{"merge"}, 2, "codeassay: unknown command \"merge\"\n"},
		{"study first", []string{"study.toml"}, 2, "codeassay: unknown command \"study.toml\"\nTo rank it: codeassay rank study.toml\n"},
		{"flag", []string{"rank", "--formt", "json"}, 2, "codeassay: unknown flag --formt; did you mean --format?\ncodeassay rank --help lists the flags.\n"},
		{"short flag", []string{"rank", "-x"}, 2, "codeassay: unknown flag -x\n"},
		{"later flag", []string{"rank", "--store", "x"}, 2, "codeassay: unknown flag --store"},
		{"flag of another", []string{"rank", "--force"}, 2, "codeassay: unknown flag --force"},
		{"no value", []string{"rank", "--out"}, 2, "codeassay: flag needs an argument: --out\n"},
		{"format", []string{"rank", "--format", "xml"}, 2, "codeassay: --format \"xml\": one of text, json, csv, markdown, latex\n"},
		{"workers", []string{"rank", "--workers", "-1"}, 2, "codeassay: --workers -1: from 1 to 4096, or 0 for one a processor\n"},
		{"workers in words", []string{"rank", "--workers", "two"}, 2, "codeassay: --workers two: a whole number is needed\n"},
		{"seed", []string{"rank", "--seed", "-3"}, 2, "codeassay: --seed -3: a whole number, 0 or above is needed\n"},
		{"two studies", []string{"rank", "a.toml", "b.toml"}, 2, "codeassay: rank takes one study, not 2 arguments\n"},
		{"three recordings", []string{"inspect", "a.csv", "b.csv", "c.csv"}, 2, "codeassay: inspect takes a study, or a recording, not 3 arguments\n"},

		{"no file", []string{"rank", filepath.Join(dir, "none.toml")}, 2, "codeassay: " + filepath.Join(dir, "none.toml") + ": no such file\nName a study file"},
		{"folder", []string{"rank", dir}, 2, "codeassay: " + dir + ": is a folder\n"},
		{"recording for a study", []string{"rank", small("small.csv")}, 2, "codeassay: " + small("small.csv") + ": is a recording, not a study\nA study is a text file"},
		{"syntax", []string{"rank", write("syntax.toml", "[sweep\n")}, 2, "codeassay: " + dir + "/syntax.toml:1: not valid TOML"},
		{"key", []string{"inspect", write("key.toml", files+"[sweep]\ndraw = 1")}, 2, "codeassay: " + dir + "/key.toml:5: [sweep] draw: unknown key; did you mean draws?\n"},
		{"value", []string{"rank", write("value.toml", files+"[sweep]\ndraws = 0")}, 2, "codeassay: " + dir + "/value.toml:5: [sweep] draws = 0: at least 1"},
		{"code", []string{"rank", write("code.toml", files+"[sweep]\ncodes = [\"burst-raet\"]")}, 2, "codeassay: " + dir + "/code.toml:5: [sweep] codes: unknown code \"burst-raet\"; did you mean burst-rate?\n"},
		{"estimator", []string{"rank", write("with.toml", files+"[estimate]\nwith = [\"welsh\"]")}, 2, "codeassay: " + dir + "/with.toml:5: [estimate] with: unknown estimator \"welsh\"; did you mean welch?\n"},
		{"scenario", []string{"rank", write("scenario.toml", "[recording]\nscenario = \"x\"")}, 2, "codeassay: " + dir + "/scenario.toml:2: [recording] scenario: unknown scenario \"x\"; there are paired-drive\n"},
		{"range of scenario", []string{"rank", write("depth.toml", "[recording]\nscenario = \"paired-drive\"\nevent_depth = 0.9")}, 2, "codeassay: " + dir + "/depth.toml:3: [recording] event_depth = 0.9: from 0 to 0.3"},
		{"streams", []string{"rank", write("data.toml", files)}, 2, "codeassay: " + dir + "/t.csv"},
		{"too many cells", []string{"rank", write("cells.toml", "[recording]\nspikes = \""+absolute(t, small("small.csv"))+"\"\nstreams = \""+absolute(t, small("small-streams.csv"))+"\"\n[sweep]\ncells = [9]")}, 2,
			"codeassay: " + dir + "/cells.toml:5: [sweep] cells = [9]: sizes from 1 to the recording's 4 units\n"},

		{"half a recording", []string{"inspect", "spikes.csv"}, 2, "codeassay: spikes.csv: spikes or streams alone are no recording\nName both: codeassay inspect spikes.csv streams.csv\n"},
		{"study and recording", []string{"inspect", "study.toml", "streams.csv"}, 2, "codeassay: study.toml: not a recording"},
		{"no recording", []string{"inspect", filepath.Join(dir, "x.csv"), filepath.Join(dir, "y.csv")}, 2, "codeassay: " + dir + "/y.csv: no such file"},

		{"nowhere", []string{"simulate"}, 2, "codeassay: simulate needs --out DIR, the folder to write into\nExample: "},
		{"container", []string{"simulate", "--out", dir, "--container", "zip"}, 2, "codeassay: --container \"zip\": csv or npz\n"},
		{"no cells", []string{"simulate", "--out", dir, "--cells", "0"}, 2, "codeassay: --cells 0: at least 1\n"},
		{"no time", []string{"simulate", "--out", dir, "--duration", "-2"}, 2, "codeassay: --duration -2: seconds above 0\n"},
		{"files", []string{"simulate", "--out", filepath.Join(dir, "new"), small("small.toml")}, 2, "codeassay: " + small("small.toml") + ":4: [recording] names files: simulate needs a scenario"},
		{"is there", []string{"simulate", "--out", there, good}, 2, "codeassay: " + there + "/truth.json: is there already\nAdd --force"},
		{"out is a file", []string{"inspect", "--out", good, small("small.toml")}, 1, "codeassay: " + good + ": cannot be written: not a directory\n"},
		{"out below a file", []string{"simulate", "--out", good + "/x", good}, 1, "codeassay: " + good + "/x/spikes.csv: cannot be written: not a directory\n"},
	} {
		t.Run(c.name, func(t *testing.T) {
			code, stdout, stderr := call(t.Context(), c.args...)
			assert.Equal(t, c.code, code)
			assert.Empty(t, stdout)
			assert.True(t, strings.HasPrefix(stderr, c.stderr), stderr)
			assert.NotContains(t, stderr, "Usage:")
		})
	}
	entries, err := os.ReadDir(there)
	require.NoError(t, err)
	assert.Len(t, entries, 1, "nothing was written beside what was there")
	assert.NoDirExists(t, filepath.Join(dir, "new"))
}

func absolute(t *testing.T, path string) string {
	abs, err := filepath.Abs(path)
	require.NoError(t, err)
	return abs
}

func TestNamesFromFilesCannotDriveATerminal(t *testing.T) {
	code, _, stderr := call(t.Context(), "rank", "evil\x1b[31m.toml")
	assert.Equal(t, exitBad, code)
	assert.NotContains(t, stderr, "\x1b")
}

func TestVersion(t *testing.T) {
	stdout, _ := mustCall(t, "--version")
	assert.Regexp(t, `^codeassay \d+\.\d+\.\d+\S* \(go1\.`, stdout)
	assert.True(t, strings.HasPrefix(stdout, "codeassay "+version()))
}

func TestInterrupted(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	for _, args := range [][]string{{"rank"}, {"inspect", studies + "small.toml"}, {"simulate", "--out", filepath.Join(t.TempDir(), "x"), "--cells", "4", "--duration", "20"}} {
		code, stdout, stderr := call(ctx, args...)
		assert.Equal(t, exitInterrupted, code, args)
		assert.Empty(t, stdout)
		assert.Equal(t, "codeassay: interrupted\n", stderr)
	}

	ctx, cancel = context.WithTimeout(t.Context(), 300*time.Millisecond)
	defer cancel()
	began := time.Now()
	code, _, _ := call(ctx, "rank") // far longer than that
	assert.Equal(t, exitInterrupted, code)
	assert.Less(t, time.Since(began), 10*time.Second)
}

type closedPipe struct{}

func (closedPipe) Write([]byte) (int, error) {
	return 0, fmt.Errorf("write: %w", syscall.EPIPE)
}

type fullDisk struct{}

func (fullDisk) Write([]byte) (int, error) { return 0, syscall.ENOSPC }

func TestReadersThatLeave(t *testing.T) {
	var stderr bytes.Buffer
	args := []string{"inspect", studies + "small.toml"}
	assert.Zero(t, run(t.Context(), args, nil, closedPipe{}, &stderr))
	assert.Empty(t, stderr.String())

	assert.Equal(t, exitFailed, run(t.Context(), args, nil, fullDisk{}, &stderr))
	assert.Equal(t, "codeassay: writing to standard output: no space left on device\n", stderr.String())
}

func TestWarningsBesideTables(t *testing.T) {
	_, stderr := mustCall(t, "inspect", "--format", "csv", studies+"small.toml")
	assert.Contains(t, stderr, "codeassay: warning: drive: the stream is not Gaussian")
	assert.NotContains(t, stderr, "chance", "notes stay in the document")
}

// The whole path on a small ensemble: simulate, inspect, rank; the same result
// for every number of workers and from every container.
func TestSimulateInspectRank(t *testing.T) {
	dir := t.TempDir()
	study := filepath.Join(dir, "small.toml")
	require.NoError(t, os.WriteFile(study, []byte(`title = "quoted \"name\""
[recording]
scenario = "paired-drive"
cells = 8
duration_s = 40
[sweep]
codes = ["spike-rate", "event-rate", "burst-residual"]
pairs = ["event-rate+burst-residual"]
cells = [2, 8]
draws = 3
[[code]]
name = "doublets"
weights = [0, 1, 0]
`), 0o644))
	text, npz := filepath.Join(dir, "csv"), filepath.Join(dir, "npz")
	stdout, stderr := mustCall(t, "simulate", "--out", text, study)
	assert.Contains(t, stderr, "rank it: codeassay rank "+filepath.Join(text, "study.toml"))
	assert.Contains(t, stdout, "event-rate+burst-residual")
	_, stderr = mustCall(t, "simulate", "--out", npz, "--container", "npz", "--quiet", study)
	assert.Empty(t, stderr)
	assert.ElementsMatch(t, []string{"spikes.csv", "streams.csv", "truth.json", "study.toml"}, list(t, text))
	assert.ElementsMatch(t, []string{"recording.npz", "truth.json", "study.toml"}, list(t, npz))

	truth, err := os.ReadFile(filepath.Join(text, "truth.json"))
	require.NoError(t, err)
	again, err := os.ReadFile(filepath.Join(npz, "truth.json"))
	require.NoError(t, err)
	assert.Equal(t, string(truth), string(again))
	var doc truthDocument
	require.NoError(t, json.Unmarshal(truth, &doc))
	assert.Len(t, doc.Rows, 2*2*4)
	assert.Len(t, doc.Joint, 2)
	assert.Equal(t, 8, doc.Recording.Cells)

	_, _ = mustCall(t, "simulate", "--out", text, "--force", "--quiet", study)
	_, _ = mustCall(t, "inspect", filepath.Join(npz, "recording.npz"))
	inspected, _ := mustCall(t, "inspect", "--format", "json", filepath.Join(text, "study.toml"))
	inspectedNPZ, _ := mustCall(t, "inspect", "--format", "json", filepath.Join(npz, "study.toml"))
	assert.Equal(t, inspected, inspectedNPZ)

	first, _ := mustCall(t, "rank", "--format", "json", "--workers", "1", filepath.Join(text, "study.toml"))
	for _, workers := range []string{"2", "7"} {
		other, _ := mustCall(t, "rank", "--format", "json", "--workers", workers, filepath.Join(npz, "study.toml"))
		assert.Equal(t, first, other, "%s workers", workers)
	}
	// The rows of the spikes in any other order.
	spikes, err := os.ReadFile(filepath.Join(text, "spikes.csv"))
	require.NoError(t, err)
	rows := strings.SplitAfter(string(spikes), "\n")
	rand.New(rand.NewPCG(1, 1)).Shuffle(len(rows)-2, func(i, j int) { rows[1+i], rows[1+j] = rows[1+j], rows[1+i] })
	require.NoError(t, os.WriteFile(filepath.Join(text, "spikes.csv"), []byte(strings.Join(rows, "")), 0o644))
	shuffled, _ := mustCall(t, "rank", "--format", "json", filepath.Join(text, "study.toml"))
	assert.Equal(t, first, shuffled)

	reseeded, _ := mustCall(t, "rank", "--format", "json", "--seed", "8", filepath.Join(text, "study.toml"))
	assert.NotEqual(t, first, reseeded)
	assert.Contains(t, reseeded, `"seed": 8`)
}

func list(t *testing.T, dir string) []string {
	entries, err := os.ReadDir(dir)
	require.NoError(t, err)
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	return names
}

func TestFilesOfAFolder(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "a", "b")
	_, stderr := mustCall(t, "inspect", "--out", dir, studies+"small.toml")
	assert.Equal(t, "codeassay: 9 files in "+dir+"\n", stderr)
	assert.ElementsMatch(t, []string{"inspect.json", "inspect.txt", "units.csv", "units.md", "units.tex",
		"intervals.svg", "intervals.png", "stream-spectra.svg", "stream-spectra.png"}, list(t, dir))
	info, err := os.Stat(filepath.Join(dir, "units.csv"))
	require.NoError(t, err)
	assert.Zero(t, info.Mode()&0o111, "nothing is executable")
}

func TestWholeOrNothing(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "x.txt")
	require.NoError(t, os.WriteFile(path, []byte("old"), 0o644))
	err := writeWhole(path, func(w io.Writer) error {
		_, _ = io.WriteString(w, "half")
		return syscall.ENOSPC
	})
	assert.EqualError(t, err, path+": cannot be written: no space left on device")
	text, readErr := os.ReadFile(path)
	require.NoError(t, readErr)
	assert.Equal(t, "old", string(text))
	assert.Equal(t, []string{"x.txt"}, list(t, dir))
}

func TestTheTerminalsWidthIsHonoured(t *testing.T) {
	for columns, want := range map[string]int{"": 80, "60": 60, "10": 40, "1000": 200, "wide": 80, "-3": 80} {
		t.Setenv("COLUMNS", columns)
		assert.Equal(t, want, newEnvironment(io.Discard, io.Discard).width, columns)
	}
}

func TestQuietProgress(t *testing.T) {
	var err bytes.Buffer
	e := &environment{stderr: &err, live: true}
	update, finish := e.progress("ranking", true)
	assert.Nil(t, update)
	finish()
	assert.Empty(t, err.String())

	update, finish = e.progress("ranking", false)
	for i := range 5 {
		update(i, 5)
	}
	finish()
	finish()
	e.live = false
	update, _ = e.progress("ranking", false)
	assert.Nil(t, update)
}

func TestCatalogueListsWhatTheEngineKnows(t *testing.T) {
	var names []string
	for _, e := range catalog.Estimators() {
		names = append(names, e.Name)
	}
	assert.Equal(t, sweep.EstimatorNames(), names)
}
