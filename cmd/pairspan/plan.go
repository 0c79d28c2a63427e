package main

import (
	"errors"
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"pairspan/cmd/pairspan/internal/report"
	"pairspan/scenarios"
	"pairspan/scenarios/plan"
)

// formats are what can go to standard output.
var formats = []struct {
	name  string
	write func(io.Writer, *plan.Plan) error
}{{"text", report.Text}, {"json", report.JSON}, {"csv", report.CSV}}

// output is where a plan goes, and whether it may leave the house.
type output struct {
	dir, format string
	withhold    bool
}

func (o *output) flags(cmd *cobra.Command) {
	cmd.Flags().StringVar(&o.dir, "out", "", "also write report.html, plan.json and curve.csv into this folder")
	cmd.Flags().StringVar(&o.format, "format", "text", "what goes to standard output: "+formatNames())
	cmd.Flags().BoolVar(&o.withhold, "withhold", false,
		"for a report that leaves the house: leave out of everything written the title, names of\n"+
			"compared cases, origins, prices and budget, and the names and text of the input files.\n"+
			"Names of detectors stay, and the SHA-256 by which the input files can be told")
}

func formatNames() string {
	var names []string
	for _, f := range formats {
		names = append(names, f.name)
	}
	return strings.Join(names, ", ")
}

// writer finds the writer of the chosen format, before any work is done.
func (o *output) writer() (func(io.Writer, *plan.Plan) error, error) {
	for _, f := range formats {
		if f.name == o.format {
			return f.write, nil
		}
	}
	return nil, fmt.Errorf("--format %q is not one of %s", o.format, formatNames())
}

// axis is an entry in place of distance, and its range.
type axis struct{ entry, from, to string }

func (a *axis) flags(cmd *cobra.Command) {
	cmd.Flags().StringVar(&a.entry, "against", "", "also plan over this entry in place of distance, at the installed length")
	cmd.Flags().StringVar(&a.from, "from", "", "with --against: its first value (default: chosen about the figure in use)")
	cmd.Flags().StringVar(&a.to, "to", "", "with --against: its last value")
}

// of returns the axis of a scenario, nil where none is asked for.
func (a *axis) of(s *scenarios.Scenario) (*plan.Axis, error) {
	if a.entry == "" {
		if a.from != "" || a.to != "" {
			return nil, errors.New("--from and --to are of an entry: add --against ENTRY")
		}
		return nil, nil
	}
	x, err := plan.NewAxis(s, a.entry, a.from, a.to)
	if err != nil {
		return nil, fmt.Errorf("--against %w", err)
	}
	return x, nil
}

func (c *commands) planCommand() *cobra.Command {
	var o output
	var a axis
	cmd := &cobra.Command{
		Use:   "plan FILE",
		Short: "Say whether a scenario's link meets its need, by how much, and what stands in the way",
		Example: "  pairspan plan link.yaml\n  pairspan plan link.yaml --out report --format csv > curve.csv\n" +
			"  pairspan plan link.yaml --against window_ps --from 200 --to 2000 --out report",
		Args: oneFile,
		RunE: func(cmd *cobra.Command, args []string) error {
			return c.plan(cmd, o, a, func() (*scenarios.Scenario, error) { return scenarios.Load(args[0]) })
		},
	}
	o.flags(cmd)
	a.flags(cmd)
	return cmd
}

func (c *commands) demoCommand() *cobra.Command {
	var o output
	var a axis
	cmd := &cobra.Command{
		Use:   "demo",
		Short: "Plan a scenario that is built in: an invented campus, three candidate detectors",
		Args:  cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			return c.plan(cmd, o, a, func() (*scenarios.Scenario, error) {
				return scenarios.LoadFS(scenarios.Examples, "demo.yaml")
			})
		},
	}
	o.flags(cmd)
	a.flags(cmd)
	return cmd
}

// plan reads, plans, writes the folder and then standard output.
func (c *commands) plan(cmd *cobra.Command, o output, a axis, load func() (*scenarios.Scenario, error)) error {
	write, err := o.writer()
	if err != nil {
		return err
	}
	s, err := load()
	if err != nil {
		return err
	}
	over, err := a.of(s)
	if err != nil {
		return err
	}
	p, err := plan.New(cmd.Context(), s, version, progress(c.errs))
	if err != nil {
		return err
	}
	if over != nil {
		if err := p.AddAgainst(cmd.Context(), over, progress(c.errs)); err != nil {
			return fmt.Errorf("--against %w", err)
		}
	}
	if o.withhold {
		p = p.Withhold()
	}
	if err := c.deliver(o.dir,
		func(w io.Writer) error { return write(w, p) },
		func() (string, error) { return report.Page, report.Folder(o.dir, p) }); err != nil {
		return err
	}
	c.status = status(p.Cases[0].Answer.Outcome)
	return nil
}

// status turns the answer of the scenario as filed into an exit status.
func status(o plan.Outcome) int {
	if o == plan.Met || o == plan.NoNeed {
		return statusYes
	}
	return statusNo
}

// oneFile asks for exactly one scenario file.
func oneFile(cmd *cobra.Command, args []string) error {
	if len(args) != 1 {
		return fmt.Errorf("%s takes one scenario file, not %d; pairspan new prints one to start from", cmd.CommandPath(), len(args))
	}
	return nil
}
