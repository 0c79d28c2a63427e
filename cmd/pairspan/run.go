package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os/signal"
	"syscall"

	"github.com/spf13/cobra"

	"pairspan/scenarios"
)

// version is the program's, written into every plan.
const version = "0.1.0"

// Exit statuses, the same in every format.
const (
	statusYes         = 0   // the need is met, or none was stated
	statusNo          = 1   // any other outcome
	statusInput       = 2   // usage or input is wrong
	statusFailed      = 3   // the program or its output failed
	statusInterrupted = 130 // Ctrl-C
)

// run executes one command line and returns its exit status.
func run(args []string, out, errs io.Writer) int {
	ctx, stop := signal.NotifyContext(context.Background(), syscall.SIGINT, syscall.SIGTERM)
	defer stop()
	c := &commands{out: out, errs: errs}
	root := c.root()
	root.SetArgs(args)
	root.SetOut(out)
	root.SetErr(errs)
	err := root.ExecuteContext(ctx)
	switch {
	case errors.Is(err, context.Canceled):
		fmt.Fprintln(errs, "pairspan: interrupted, nothing was written")
		return statusInterrupted
	case err != nil:
		return complain(errs, err)
	}
	return c.status
}

// outputError is a failure to write what was asked for.
type outputError struct{ error }

func (e outputError) Unwrap() error { return e.error }

// complain prints an error and returns its status.
func complain(errs io.Writer, err error) int {
	var input scenarios.Errors
	var output outputError
	switch {
	case errors.As(err, &input):
		fmt.Fprintln(errs, input.Error())
		return statusInput
	case errors.As(err, &output):
		fmt.Fprintln(errs, "pairspan: "+err.Error())
		return statusFailed
	}
	fmt.Fprintln(errs, "pairspan: "+err.Error())
	return statusInput
}

// commands are the subcommands, with what they share.
type commands struct {
	out, errs io.Writer
	status    int
}

func (c *commands) root() *cobra.Command {
	root := &cobra.Command{
		Use:   "pairspan",
		Short: "Plan quantum key distribution with entangled photon pairs over fibre",
		Long: "pairspan plans quantum key distribution with entangled photon pairs (BBM92) over fibre.\n" +
			"It reads a scenario and says whether the link meets its need, by how much, and what\n" +
			"stands in the way. A planned key rate is an estimate, not a security claim.\n\n" +
			"Exit status: 0 need met or none stated; 1 any other outcome; 2 usage or input is wrong;\n" +
			"3 the program or its output failed; 130 interrupted.",
		Example: "  pairspan demo --out report\n  pairspan new > link.yaml && pairspan plan link.yaml",
		Version: version,
		Args:    cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			return errors.New("a command is missing: plan, demo, source, new or entries; pairspan --help says more")
		},
		SilenceErrors:     true,
		SilenceUsage:      true,
		CompletionOptions: cobra.CompletionOptions{DisableDefaultCmd: true},
	}
	root.AddCommand(c.planCommand(), c.demoCommand(), c.sourceCommand(), c.newCommand(), c.entriesCommand())
	return root
}
