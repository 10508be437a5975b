package main

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"

	"github.com/pelletier/go-toml/v2"
	"github.com/spf13/cobra"

	"codeassay/bench"
	"codeassay/scenarios/files"
	"codeassay/scenarios/synthetic"
)

// simulateFlags are the flags of simulate.
type simulateFlags struct {
	shared
	container string
	force     bool
	cells     int
	duration  float64
}

func simulateCommand(env *environment) *cobra.Command {
	var flags simulateFlags
	cmd := &cobra.Command{
		Use:   "simulate [flags] --out DIR [STUDY.toml]",
		Short: "write a scenario's recording and its truth to disk",
		Long: `simulate writes the recording of a study's scenario (without a study, of the
demo) into a folder: spikes.csv and streams.csv, or recording.npz; beside it
truth.json, what every linear code truly carries; and study.toml, which ranks
the recording. Files that are there already are kept unless --force is given.
Standard output lists the truth.`,
		Example: `  codeassay simulate --out demo
  codeassay simulate --out demo --cells 64 --duration 120 --container npz
  codeassay rank demo/study.toml`,
		Args: atMost(1, "one study"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := flags.check(); err != nil {
				return err
			}
			return runSimulate(cmd, env, &flags, args)
		},
	}
	flags.register(cmd, "folder to write into (needed)")
	f := cmd.Flags()
	f.StringVar(&flags.container, "container", "csv", "csv or npz")
	f.IntVar(&flags.cells, "cells", 0, "number of cells in place of the study's")
	f.Float64Var(&flags.duration, "duration", 0, "seconds in place of the study's")
	f.BoolVar(&flags.force, "force", false, "overwrite files")
	return cmd
}

func runSimulate(cmd *cobra.Command, env *environment, flags *simulateFlags, args []string) error {
	if flags.out == "" {
		return advice{errors.New("simulate needs --out DIR, the folder to write into"), "Example: codeassay simulate --out demo"}
	}
	if flags.container != "csv" && flags.container != "npz" {
		return fmt.Errorf("--container %q: csv or npz", flags.container)
	}
	study, err := flags.study(cmd, args)
	if err != nil {
		return err
	}
	if cmd.Flags().Changed("cells") {
		if study.Recording.Cells = flags.cells; flags.cells < 1 {
			return fmt.Errorf("--cells %d: at least 1", flags.cells)
		}
	}
	if cmd.Flags().Changed("duration") {
		if study.Recording.DurationS = flags.duration; !(flags.duration > 0) {
			return fmt.Errorf("--duration %v: seconds above 0", flags.duration)
		}
	}
	if study.Recording.Scenario == "" {
		return study.Fault("recording.spikes", `[recording] names files: simulate needs a scenario, such as scenario = "paired-drive"`)
	}
	if err := study.Check(); err != nil {
		return err
	}
	source, scenario, err := openRecording(study)
	if err != nil {
		return err
	}
	truth, err := newTruthDocument(study, scenario)
	if err != nil {
		return err
	}
	if err := writeSimulated(cmd, flags, study, source, scenario, truth); err != nil {
		return err
	}
	flags.say(env, "recording, truth.json and study.toml in %s; rank it: codeassay rank %s", flags.out, filepath.Join(flags.out, "study.toml"))
	return flags.print(env, outputs{text: truth.text, json: truth.json, csv: truth.csv, markdown: truth.markdown, latex: truth.latex}, nil)
}

// writeSimulated writes the recording, then the truth, and last the study, which
// is there only when all it names is.
func writeSimulated(cmd *cobra.Command, flags *simulateFlags, study bench.Study, source bench.Source, scenario *synthetic.PairedDrive, truth *truthDocument) error {
	data := []string{"spikes.csv", "streams.csv"}
	if flags.container == "npz" {
		data = []string{"recording.npz"}
	}
	for _, name := range append(slices.Clone(data), "truth.json", "study.toml") {
		path := filepath.Join(flags.out, name)
		switch _, err := os.Lstat(path); {
		case err == nil && !flags.force:
			return advice{fmt.Errorf("%s: is there already", path), "Add --force to overwrite, or name another folder with --out."}
		case err != nil && !errors.Is(err, fs.ErrNotExist):
			return cannotWrite(path, err)
		}
	}
	if err := os.MkdirAll(flags.out, 0o777); err != nil {
		return cannotWrite(flags.out, err)
	}
	var err error
	if flags.container == "npz" {
		err = files.WriteNPZ(filepath.Join(flags.out, data[0]), source)
	} else {
		err = files.WriteCSV(flags.out, source)
	}
	if err != nil {
		return failure{err}
	}
	if err := cmd.Context().Err(); err != nil {
		return err
	}
	if err := writeWhole(filepath.Join(flags.out, "truth.json"), truth.json); err != nil {
		return err
	}
	return writeWhole(filepath.Join(flags.out, "study.toml"), func(w io.Writer) error {
		return writeStudy(w, study, scenario, data)
	})
}

// writeStudy writes the study that ranks the files with the same settings.
func writeStudy(w io.Writer, study bench.Study, scenario *synthetic.PairedDrive, data []string) error {
	type recordingPart struct {
		Spikes  string `toml:"spikes"`
		Streams string `toml:"streams"`
		Units   int    `toml:"units"`
	}
	type sweepPart struct {
		Codes            []string `toml:"codes"`
		Pairs            []string `toml:"pairs"`
		Cells            []int    `toml:"cells,omitempty"`
		BandsHz          []any    `toml:"bands_hz"`
		Draws            int      `toml:"draws"`
		BinMS            float64  `toml:"bin_ms"`
		FractionWindowMS float64  `toml:"fraction_window_ms"`
		FractionPrior    float64  `toml:"fraction_prior"`
	}
	type code struct {
		Name    string    `toml:"name"`
		Weights []float64 `toml:"weights"`
		Over    []float64 `toml:"over,omitempty"`
	}
	var out struct {
		Title     string             `toml:"title"`
		Seed      uint64             `toml:"seed"`
		Recording recordingPart      `toml:"recording"`
		Bursts    bench.BurstsPart   `toml:"bursts"`
		Sweep     sweepPart          `toml:"sweep"`
		Codes     []code             `toml:"code,omitempty"`
		Estimate  bench.EstimatePart `toml:"estimate"`
	}
	s := study.Sweep
	out.Title, out.Seed, out.Bursts, out.Estimate = study.Title, study.Seed, study.Bursts, study.Estimate
	out.Recording = recordingPart{data[0], data[len(data)-1], len(scenario.Units())}
	out.Sweep = sweepPart{s.Codes, s.Pairs, s.Cells, nil, s.Draws, s.BinMS, s.FractionWindowMS, s.FractionPrior}
	for _, c := range study.Codes {
		out.Codes = append(out.Codes, code{c.Name, c.Weights, c.Over})
	}
	for _, b := range bandsOf(study, scenario) {
		if b.Low == 0 {
			out.Sweep.BandsHz = append(out.Sweep.BandsHz, b.High)
		} else {
			out.Sweep.BandsHz = append(out.Sweep.BandsHz, []any{b.Low, b.High})
		}
	}
	e := toml.NewEncoder(w)
	e.SetIndentTables(false)
	if _, err := io.WriteString(w, "# Written by codeassay simulate: "+study.Recording.Scenario+". What is true is in truth.json.\n"); err != nil {
		return err
	}
	return e.Encode(out)
}
