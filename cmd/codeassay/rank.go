package main

import (
	"io"

	"github.com/spf13/cobra"

	"codeassay/bench"
	"codeassay/bench/report"
)

func rankCommand(env *environment) *cobra.Command {
	var flags shared
	var verbose bool
	cmd := &cobra.Command{
		Use:   "rank [flags] [STUDY.toml]",
		Short: "rank codes by their bits/s, over ensemble sizes and bands",
		Long: `rank estimates the bits per second that every code carries about every stream,
over ensemble sizes and frequency bands, with intervals, tests, ranks and
letters (codes that share a letter cannot be told apart). Without a study it
ranks the built-in demo, whose truth is known.

A study names the recording:

  [recording]
  spikes = "spikes.csv"     # header unit,time_s[,trial][,event]; a spike a row
  streams = "streams.csv"   # header time_s,NAME,NAME,…[,trial]; uniform

` + keysHelp(),
		Example: `  codeassay rank
  codeassay rank study.toml
  codeassay rank study.toml --out figures
  codeassay rank study.toml --format json > result.json`,
		Args: atMost(1, "one study"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := flags.check(); err != nil {
				return err
			}
			study, err := flags.study(cmd, args)
			if err != nil {
				return err
			}
			update, finish := env.progress("ranking", flags.quiet)
			doc, err := runRank(cmd.Context(), study, rankOptions{Workers: flags.workers, Progress: update})
			finish()
			if err != nil {
				return study.Locate(err)
			}
			return showRanking(env, &flags, doc, verbose)
		},
	}
	flags.register(cmd, "folder for the tables and the figures (SVG, PNG)")
	cmd.Flags().BoolVar(&verbose, "verbose", false, "text: every ensemble size, every estimator and all settings")
	return cmd
}

// showRanking writes a ranking to the folder of --out, then to standard output.
func showRanking(env *environment, flags *shared, doc *bench.Document, verbose bool) error {
	to := func(write func(io.Writer, *bench.Document) error) func(io.Writer) error {
		return func(w io.Writer) error { return write(w, doc) }
	}
	text := func(o report.TextOptions) func(io.Writer) error {
		return func(w io.Writer) error { return report.Text(w, doc, o) }
	}
	files := []outFile{
		{"rank.json", to(report.JSON)}, {"rank.txt", text(report.TextOptions{Verbose: true})},
		{"rows.csv", to(report.CSV)}, {"joint.csv", to(report.JointCSV)}, {"chance.csv", to(report.ChanceCSV)},
		{"rank.md", to(report.Markdown)}, {"rank.tex", to(report.LaTeX)},
	}
	drawn := 0
	if flags.out != "" {
		paths, err := report.Figures(flags.out, doc)
		if err != nil {
			return cannotWrite(flags.out, err)
		}
		drawn = len(paths)
	}
	if err := flags.keep(env, files, drawn); err != nil {
		return err
	}
	return flags.print(env, outputs{
		text: text(report.TextOptions{Width: env.width, Color: env.colour, Verbose: verbose}),
		json: to(report.JSON), csv: to(report.CSV), markdown: to(report.Markdown), latex: to(report.LaTeX),
	}, doc.Warnings)
}
