package main

import (
	"fmt"
	"io"
	"path/filepath"
	"runtime"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"codeassay/bench"
	"codeassay/bench/catalog"
	"codeassay/estimators"
)

// formats of results on standard output.
var formats = []string{"text", "json", "csv", "markdown", "latex"}

// shared are the flags that all commands have.
type shared struct {
	format  string
	out     string
	seed    uint64
	workers int
	quiet   bool
}

func (s *shared) register(cmd *cobra.Command, out string) {
	f := cmd.Flags()
	f.SortFlags = false
	f.StringVar(&s.format, "format", "text", "what goes to standard output: "+strings.Join(formats, ", "))
	f.StringVar(&s.out, "out", "", out)
	f.Uint64Var(&s.seed, "seed", 0, "seed in place of the study's")
	f.IntVar(&s.workers, "workers", 0, "goroutines at work; 0: one a processor (results do not depend on it)")
	f.BoolVar(&s.quiet, "quiet", false, "no progress and no warnings on standard error")
}

// check refuses flag values out of range and fills in the number of workers.
func (s *shared) check() error {
	if !slices.Contains(formats, s.format) {
		return fmt.Errorf("--format %q: one of %s", s.format, strings.Join(formats, ", "))
	}
	if s.workers < 0 || s.workers > 4096 {
		return fmt.Errorf("--workers %d: from 1 to 4096, or 0 for one a processor", s.workers)
	}
	if s.workers == 0 {
		s.workers = runtime.GOMAXPROCS(0)
	}
	return nil
}

// study reads the study that the arguments name, or the demo, with the flags'
// seed, and checks the names in it.
func (s *shared) study(cmd *cobra.Command, args []string) (bench.Study, error) {
	study := bench.Demo()
	if len(args) > 0 {
		var err error
		if study, err = bench.Load(args[0]); err != nil {
			return study, err
		}
	}
	if cmd.Flags().Changed("seed") {
		study.Seed = s.seed
	}
	return study, catalog.Check(study)
}

// outputs are the ways in which a result can be written.
type outputs struct {
	text, json, csv, markdown, latex func(io.Writer) error
}

// print writes a result to standard output in the format asked for. A format
// without warnings in it has them on standard error.
func (s *shared) print(env *environment, o outputs, warnings []estimators.Warning) error {
	if !s.quiet && s.format != "text" && s.format != "json" {
		for _, w := range warnings {
			if w.Severity == estimators.Weak {
				fmt.Fprintf(env.stderr, "codeassay: warning: %s\n", oneLine(w.About+": "+w.Text))
			}
		}
	}
	write := map[string]func(io.Writer) error{"text": o.text, "json": o.json, "csv": o.csv, "markdown": o.markdown, "latex": o.latex}[s.format]
	if err := write(env.stdout); err != nil {
		return failure{fmt.Errorf("writing to standard output: %w", err)}
	}
	return nil
}

// say tells on standard error what became of a file.
func (s *shared) say(env *environment, format string, args ...any) {
	if !s.quiet {
		fmt.Fprintln(env.stderr, "codeassay: "+oneLine(fmt.Sprintf(format, args...)))
	}
}

// keep writes files into the folder of --out, each complete or not at all; others
// are there already.
func (s *shared) keep(env *environment, files []outFile, others int) error {
	if s.out == "" {
		return nil
	}
	for _, f := range files {
		if err := writeWhole(filepath.Join(s.out, f.name), f.write); err != nil {
			return err
		}
	}
	s.say(env, "%d files in %s", len(files)+others, s.out)
	return nil
}

// outFile is a file to be written into the folder of --out.
type outFile struct {
	name  string
	write func(io.Writer) error
}
