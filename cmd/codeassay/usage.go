package main

import (
	"errors"
	"fmt"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"codeassay/scenarios"
)

// unknownCommand is what runs where the first argument names no command.
func unknownCommand(cmd *cobra.Command, args []string) error {
	if len(args) == 0 {
		return cmd.Help()
	}
	var names []string
	for _, c := range cmd.Commands() {
		if !c.Hidden {
			names = append(names, c.Name())
		}
	}
	remedy := "There are " + strings.Join(names, ", ") + "; codeassay --help says more."
	if near := scenarios.Nearest(args[0], names); near != "" {
		remedy = "Did you mean codeassay " + near + "?"
	}
	if strings.HasSuffix(args[0], ".toml") {
		remedy = "To rank it: codeassay rank " + args[0]
	}
	return advice{fmt.Errorf("unknown command %q", args[0]), remedy}
}

// flagError says which flag was meant.
func flagError(cmd *cobra.Command, err error) error {
	var wrong *pflag.InvalidValueError
	if errors.As(err, &wrong) {
		want := map[string]string{"int": "a whole number", "uint64": "a whole number, 0 or above", "float64": "a number", "bool": "true or false"}[wrong.GetFlag().Value.Type()]
		return fmt.Errorf("--%s %s: %s is needed", wrong.GetFlag().Name, wrong.GetValue(), want)
	}
	var unknown *pflag.NotExistError
	if !errors.As(err, &unknown) {
		return err
	}
	var names []string
	cmd.Flags().VisitAll(func(f *pflag.Flag) { names = append(names, f.Name) })
	name := unknown.GetSpecifiedName()
	if near := scenarios.Nearest(name, names); near != "" && len(name) > 1 {
		return fmt.Errorf("unknown flag --%s; did you mean --%s?", name, near)
	}
	return fmt.Errorf("unknown flag %s%s", map[bool]string{true: "-", false: "--"}[len(name) == 1], name)
}

// atMost refuses surplus arguments.
func atMost(n int, what string) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		if len(args) > n {
			return advice{fmt.Errorf("%s takes %s, not %d arguments", cmd.Name(), what, len(args)), cmd.CommandPath() + " --help shows examples."}
		}
		return nil
	}
}
