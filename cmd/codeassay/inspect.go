package main

import (
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"codeassay/bench"
	"codeassay/bench/inspect"
)

func inspectCommand(env *environment) *cobra.Command {
	var flags shared
	cmd := &cobra.Command{
		Use:   "inspect [flags] [STUDY.toml | SPIKES STREAMS | RECORDING.npz]",
		Short: "describe a recording and what is wrong with it",
		Long: `inspect describes a recording and what is wrong with it: rates, the histogram of
intervals with the burst threshold, singlets, doublets and triplets, bursts that
chance alone would make, pairs of units that look like one cell or like copies,
shape, steadiness and spectrum of the streams. Everything suspicious is listed
with how bad it is and what to do.

Of a study, [recording] and [bursts] are used (codeassay rank --help lists the
keys); without one, recordings can be named directly. CSV, Markdown and LaTeX
list the units.`,
		Example: `  codeassay inspect study.toml
  codeassay inspect spikes.csv streams.csv
  codeassay inspect recording.npz --out figures
  codeassay inspect study.toml --format csv > units.csv`,
		Args: atMost(2, "a study, or a recording"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := flags.check(); err != nil {
				return err
			}
			return runInspect(cmd, env, &flags, args)
		},
	}
	flags.register(cmd, "folder for the tables and the figures (SVG, PNG)")
	return cmd
}

// recordingStudy is the study of a recording that is named by its files, or
// false where the arguments name none.
func recordingStudy(args []string) (bench.Study, bool, error) {
	kind := func(path string) string { return filepath.Ext(strings.TrimSuffix(strings.ToLower(path), ".gz")) }
	isRecording := func(path string) bool { return kind(path) == ".csv" || kind(path) == ".npz" }
	study := bench.Defaults()
	switch {
	case len(args) == 2:
		for _, path := range args {
			if !isRecording(path) {
				return study, true, advice{fmt.Errorf("%s: not a recording: two arguments are a file of spikes and one of streams (.csv, .npz)", path),
					"A study names both: codeassay inspect study.toml"}
			}
		}
		study.Recording.Spikes, study.Recording.Streams = args[0], args[1]
		return study, true, nil
	case len(args) == 1 && kind(args[0]) == ".npz":
		study.Recording.Spikes, study.Recording.Streams = args[0], args[0]
		return study, true, nil
	case len(args) == 1 && isRecording(args[0]):
		return study, true, advice{fmt.Errorf("%s: spikes or streams alone are no recording", args[0]), "Name both: codeassay inspect spikes.csv streams.csv"}
	}
	return study, false, nil
}

func runInspect(cmd *cobra.Command, env *environment, flags *shared, args []string) error {
	study, direct, err := recordingStudy(args)
	if err == nil && !direct {
		study, err = flags.study(cmd, args)
	}
	if err != nil {
		return err
	}
	source, scenario, err := openRecording(study)
	if err != nil {
		return err
	}
	if scenario != nil { // inspect reads every train more than once
		if source, err = scenario.Record(); err != nil {
			return err
		}
	}
	doc, err := inspect.Run(cmd.Context(), study, source, version())
	if err != nil {
		return study.Locate(err)
	}
	o := outputs{
		text: func(w io.Writer) error {
			return doc.Text(w, inspect.TextOptions{Width: env.width, Colour: env.colour})
		},
		json: doc.JSON, csv: doc.CSV, markdown: doc.Markdown, latex: doc.LaTeX,
	}
	files := []outFile{
		{"inspect.json", doc.JSON}, {"units.csv", doc.CSV}, {"units.md", doc.Markdown}, {"units.tex", doc.LaTeX},
		{"inspect.txt", func(w io.Writer) error { return doc.Text(w, inspect.TextOptions{}) }},
	}
	if flags.out != "" {
		for _, f := range doc.Figures() {
			files = append(files, outFile{f.Name + ".svg", f.SVG}, outFile{f.Name + ".png", f.PNG})
		}
	}
	if err := flags.keep(env, files, 0); err != nil {
		return err
	}
	return flags.print(env, o, doc.Warnings)
}
