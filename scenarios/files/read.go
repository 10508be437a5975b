package files

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"strings"

	"codeassay/scenarios"
)

// Paths names the files of a recording. Streams may be left out where Spikes is
// an .npz that holds both; UnitsTable is optional.
type Paths struct {
	Spikes, Streams, UnitsTable string
}

// Options are the choices of a study about its files; see scenarios.Spec for
// their meaning. The zero value reads everything as it stands.
type Options struct {
	DurationS   float64
	Units       int
	Trials      scenarios.TrialMeaning
	DropOutside bool
	// Workers parse text at the same time; 0: one for each processor. The
	// recording does not depend on it.
	Workers int
}

// container is a kind of file, known by its extension.
type container struct {
	spikes  func(path string, workers int, spec *scenarios.Spec) error
	streams func(path string, alone bool, spec *scenarios.Spec) error
}

var containers = map[string]container{
	".csv": {readSpikesCSV, readStreamsCSV},
	".npz": {readSpikesNPZ, readStreamsNPZ},
}

// Read reads and checks a recording. Errors name the file, the row and what
// would be right; what is merely weak is in the recording's Notes.
func Read(paths Paths, opts Options) (*scenarios.Recording, error) {
	if paths.Spikes == "" {
		return nil, errors.New("no file of spikes: name a .csv or .npz file")
	}
	spikes, err := containerOf(paths.Spikes)
	if err != nil {
		return nil, err
	}
	if paths.Streams == "" {
		if extension(paths.Spikes) != ".npz" {
			return nil, fmt.Errorf("%s: no file of streams beside it: name one (only an .npz can hold both)", paths.Spikes)
		}
		paths.Streams = paths.Spikes
	}
	streams, err := containerOf(paths.Streams)
	if err != nil {
		return nil, err
	}
	workers := opts.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	spec := scenarios.Spec{
		SpikesFrom: paths.Spikes, StreamsFrom: paths.Streams, UnitsFrom: paths.UnitsTable,
		DurationS: opts.DurationS, UnitCount: opts.Units, Trials: opts.Trials, DropOutside: opts.DropOutside,
	}
	if err := streams.streams(paths.Streams, paths.Streams != paths.Spikes, &spec); err != nil {
		return nil, err
	}
	if paths.UnitsTable != "" {
		spec.UnitsFirstRow = 2
		if spec.Units, err = readUnitsTable(paths.UnitsTable); err != nil {
			return nil, err
		}
	}
	if err := spikes.spikes(paths.Spikes, workers, &spec); err != nil {
		return nil, err
	}
	return scenarios.New(spec)
}

// extension is the lower-case extension of a path, without a final .gz.
func extension(path string) string {
	lower := strings.ToLower(path)
	return filepath.Ext(strings.TrimSuffix(lower, ".gz"))
}

func containerOf(path string) (container, error) {
	c, ok := containers[extension(path)]
	if ok {
		return c, nil
	}
	if info, err := os.Stat(path); err == nil && info.IsDir() {
		return c, fmt.Errorf("%s: is a folder: name a file in it", path)
	}
	if extension(path) == "" {
		return c, fmt.Errorf("%s: cannot read files without an extension; .csv and .npz can be read", path)
	}
	return c, fmt.Errorf("%s: cannot read %q files; .csv and .npz can be read", path, extension(path))
}

// open opens a file, or says in one line why it cannot.
func open(path string) (*os.File, int64, error) {
	info, err := os.Stat(path)
	var file *os.File
	if err == nil {
		if info.IsDir() {
			return nil, 0, fmt.Errorf("%s: is a folder: name a file in it", path)
		}
		file, err = os.Open(path)
	}
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil, 0, fmt.Errorf("%s: no such file: check the path, which counts from the study file", path)
	case errors.Is(err, fs.ErrPermission):
		return nil, 0, fmt.Errorf("%s: may not be read: check its permissions", path)
	case err != nil:
		return nil, 0, fmt.Errorf("%s: %w", path, err)
	}
	return file, info.Size(), nil
}
