package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"runtime/debug"
	"strings"
	"syscall"

	"github.com/spf13/cobra"

	"codeassay/bench"
)

// Exit codes.
const (
	exitDone        = 0
	exitFailed      = 1 // while running
	exitBad         = 2 // usage, study or data
	exitInterrupted = 130
)

// failure is an error that neither usage, study nor data are to blame for.
type failure struct{ error }

func (f failure) Unwrap() error { return f.error }

// advice is an error with a remedy on further lines.
type advice struct {
	error
	remedy string
}

func (a advice) Unwrap() error { return a.error }

// run is the program: it reads args and returns the exit code. Results go to
// stdout, everything else to stderr.
func run(ctx context.Context, args []string, stdin io.Reader, stdout, stderr io.Writer) (code int) {
	env := newEnvironment(stdout, stderr)
	defer func() {
		if r := recover(); r != nil {
			fmt.Fprintf(stderr, "codeassay: this is a fault of the program, please report it: %v\n%s", r, debug.Stack())
			code = exitFailed
		}
	}()
	root := newRoot(env)
	root.SetArgs(args)
	root.SetIn(stdin)
	root.SetOut(stdout)
	root.SetErr(stderr)
	return env.exit(ctx, root.ExecuteContext(ctx))
}

// exit says what went wrong, in one line and a remedy, and returns the exit code.
func (e *environment) exit(ctx context.Context, err error) int {
	switch {
	case err == nil || errors.Is(err, syscall.EPIPE):
		return exitDone
	case ctx.Err() != nil:
		fmt.Fprintln(e.stderr, "codeassay: interrupted")
		return exitInterrupted
	}
	fmt.Fprintln(e.stderr, "codeassay: "+oneLine(err.Error()))
	var fault *bench.Fault
	var hint advice
	remedy := ""
	switch {
	case errors.As(err, &fault):
		remedy = fault.Remedy
	case errors.As(err, &hint):
		remedy = hint.remedy
	}
	if remedy != "" {
		fmt.Fprintln(e.stderr, remedy)
	}
	var failed failure
	if errors.As(err, &failed) {
		return exitFailed
	}
	return exitBad
}

// oneLine makes a message one line without control characters, whatever the file
// names and the names in files hold.
func oneLine(s string) string {
	return strings.Map(func(r rune) rune {
		if r < ' ' || r == 0x7f || r >= 0x80 && r < 0xa0 {
			return '·'
		}
		return r
	}, strings.TrimSpace(s))
}

func newRoot(env *environment) *cobra.Command {
	root := &cobra.Command{
		Use:   "codeassay COMMAND [flags] [STUDY.toml]",
		Short: "Bits per second that an ensemble of spiking cells carries about its streams, code by code",
		Long: `codeassay measures how many bits per second an ensemble of spiking cells
carries about the streams that drove it, code by code, and ranks the codes.
Without a study, commands run on a built-in demo.

Exit codes: 0 done; 1 failed while running; 2 bad usage, study or data;
130 interrupted.`,
		Example: `  codeassay rank                  rank the codes of the built-in demo
  codeassay rank study.toml       rank the codes of your own recording
  codeassay inspect study.toml    look a recording over first
  codeassay rank --help           every flag and every key of a study`,
		Args:              cobra.ArbitraryArgs,
		RunE:              unknownCommand,
		Version:           versionLine(),
		SilenceErrors:     true,
		SilenceUsage:      true,
		CompletionOptions: cobra.CompletionOptions{DisableDefaultCmd: true},
	}
	root.SetVersionTemplate("{{.Version}}\n")
	root.SetUsageTemplate(strings.NewReplacer(
		"{{if .HasAvailableSubCommands}}\n  {{.CommandPath}} [command]{{end}}", "",
		".FlagUsages", fmt.Sprintf(".FlagUsagesWrapped %d", plainWidth)).Replace(root.UsageTemplate()))
	root.SetFlagErrorFunc(func(cmd *cobra.Command, err error) error {
		return advice{flagError(cmd, err), cmd.CommandPath() + " --help lists the flags."}
	})
	root.AddCommand(rankCommand(env), simulateCommand(env), inspectCommand(env))
	return root
}
