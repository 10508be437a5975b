package bench

import (
	"bytes"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/pelletier/go-toml/v2"

	"codeassay/decoders"
)

// longestStudy in bytes is far beyond any study, and keeps a recording that was
// named by mistake from being read whole.
const longestStudy = 1 << 20

// Defaults is a study with every default in place and no recording.
func Defaults() Study {
	return Study{
		Seed: 7,
		Bursts: BurstsPart{
			MaxISIMS: float64(decoders.DefaultMaxISI) / 1e6, MinSpikes: decoders.DefaultMinSpikes,
		},
		Sweep: SweepPart{
			Codes: []string{"spike-rate", "event-rate", "singlet-rate", "burst-rate", "burst-fraction", "burst-residual", "burst-size"},
			Pairs: []string{"event-rate+burst-fraction"},
			Cells: []int{}, BandsHz: []Band{}, InputBandwidthsHz: []float64{},
			Draws: 20, BinMS: 1, FractionPrior: 16,
		},
		Estimate: EstimatePart{
			With: []string{"multitaper", "welch", "plug-in"}, Overlap: 0.5, Window: "hann", Align: true, Confidence: 0.95,
		},
	}
}

// Demo is the study that commands run on where none is named.
func Demo() Study {
	s := Defaults()
	s.Title = "Two drives, one ensemble"
	s.Recording = RecordingPart{Scenario: "paired-drive"}
	s.Recording.fillScenario()
	return s
}

// fillScenario gives a scenario the demo's size where the study names none.
func (r *RecordingPart) fillScenario() {
	if r.Cells == 0 {
		r.Cells = 1024
	}
	if r.DurationS == 0 {
		r.DurationS = 300
	}
}

// Load reads a study file onto the defaults and checks it. Paths in it are taken
// relative to the file. What is wrong comes back as a *Fault.
func Load(path string) (Study, error) {
	fault := func(text, remedy string) (Study, error) {
		return Study{}, &Fault{File: path, Text: text, Remedy: remedy}
	}
	info, err := os.Stat(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return fault("no such file", "Name a study file, or none to run on the built-in demo.")
	case err != nil:
		return fault("cannot be read: "+reason(err), "")
	case info.IsDir():
		return fault("is a folder", "Name the study file in it.")
	}
	if kind := strings.ToLower(filepath.Ext(strings.TrimSuffix(strings.ToLower(path), ".gz"))); kind == ".csv" || kind == ".npz" {
		return fault("is a recording, not a study", studyExample)
	}
	if info.Size() > longestStudy {
		return fault("is too long for a study", studyExample)
	}
	text, err := os.ReadFile(path)
	if err != nil {
		return fault("cannot be read: "+reason(err), "")
	}
	if bytes.HasPrefix(text, []byte("unit,")) || bytes.HasPrefix(text, []byte("time_s,")) {
		return fault("is a recording, not a study", studyExample)
	}
	s, err := Parse(path, text)
	if err != nil {
		return Study{}, err
	}
	for _, file := range []*string{&s.Recording.Spikes, &s.Recording.Streams, &s.Recording.UnitsTable} {
		if *file != "" && !filepath.IsAbs(*file) {
			*file = filepath.Join(filepath.Dir(path), *file)
		}
	}
	return s, nil
}

const studyExample = `A study is a text file that names the recording, such as study.toml with the lines
  [recording]
  spikes = "spikes.csv"
  streams = "streams.csv"`

func reason(err error) string {
	var path *fs.PathError
	if errors.As(err, &path) {
		return path.Err.Error()
	}
	return err.Error()
}

// Parse reads a study from text onto the defaults and checks it; file names it
// in messages. Paths stay as they are.
func Parse(file string, text []byte) (Study, error) {
	s := Defaults()
	s.file = file
	text = bytes.TrimPrefix(text, []byte("\uFEFF"))
	var anything map[string]any
	if err := toml.Unmarshal(text, &anything); err != nil {
		return Study{}, syntaxFault(file, err)
	}
	lines, fault := readKeys(file, text)
	if fault != nil {
		return Study{}, fault
	}
	s.lines = lines
	if err := toml.Unmarshal(text, &s); err != nil {
		return Study{}, syntaxFault(file, err)
	}
	if s.Recording.Scenario != "" {
		s.Recording.fillScenario()
	}
	s.readBands()
	s.completeCodes()
	if err := s.Check(); err != nil {
		return Study{}, err
	}
	return s, nil
}

func syntaxFault(file string, err error) *Fault {
	f := &Fault{File: file, Text: "not valid TOML: " + strings.TrimPrefix(err.Error(), "toml: ")}
	var decode *toml.DecodeError
	if errors.As(err, &decode) {
		f.Line, _ = decode.Position()
	}
	return f
}

// readBands reads bands_hz, each an upper edge or a pair of edges.
func (s *Study) readBands() {
	s.Sweep.BandsHz = []Band{}
	for _, raw := range s.Sweep.RawBandsHz {
		switch v := raw.(type) {
		case []any:
			s.Sweep.BandsHz = append(s.Sweep.BandsHz, Band{Low: number(v[0]), High: number(v[1])})
		default:
			s.Sweep.BandsHz = append(s.Sweep.BandsHz, Band{High: number(v)})
		}
	}
}

func number(v any) float64 {
	if n, ok := v.(int64); ok {
		return float64(n)
	}
	f, _ := v.(float64)
	return f
}

// completeCodes adds a user's own codes and the members of pairs that were asked
// for to the codes; the default pair stays only where its codes are ranked.
func (s *Study) completeCodes() {
	add := func(name string) {
		if name != "" && !slices.Contains(s.Sweep.Codes, name) {
			s.Sweep.Codes = append(s.Sweep.Codes, name)
		}
	}
	for _, c := range s.Codes {
		add(c.Name)
	}
	if s.Given("sweep.pairs") {
		for _, pair := range s.Sweep.Pairs {
			if a, b, ok := strings.Cut(pair, "+"); ok {
				add(a)
				add(b)
			}
		}
		return
	}
	s.Sweep.Pairs = slices.DeleteFunc(slices.Clone(s.Sweep.Pairs), func(pair string) bool {
		a, b, _ := strings.Cut(pair, "+")
		return !slices.Contains(s.Sweep.Codes, a) || !slices.Contains(s.Sweep.Codes, b)
	})
}
