package main

import (
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"pairspan/cmd/pairspan/internal/report"
	"pairspan/scenarios/source"
)

// sourceFormats are what can go to standard output.
var sourceFormats = []struct {
	name  string
	write func(io.Writer, *source.Result) error
}{{"text", report.SourceText}, {"json", report.SourceJSON}, {"csv", report.SourceCSV}}

func sourceFormatNames() string {
	var names []string
	for _, f := range sourceFormats {
		names = append(names, f.name)
	}
	return strings.Join(names, ", ")
}

// flagNumber is a flag that takes a number and knows whether it was given.
type flagNumber struct{ at *float64 }

func (n *flagNumber) String() string {
	if n.at == nil {
		return ""
	}
	return strconv.FormatFloat(*n.at, 'g', -1, 64)
}

func (n *flagNumber) Type() string { return "number" }

func (n *flagNumber) Set(text string) error {
	x, err := strconv.ParseFloat(text, 64)
	if err != nil || x-x != 0 { // NaN and infinity
		return errors.New("not a number")
	}
	n.at = &x
	return nil
}

// value returns the number, 0 where it was not given.
func (n *flagNumber) value() float64 {
	if n.at == nil {
		return 0
	}
	return *n.at
}

// sourceFlags are what the source command is asked with.
type sourceFlags struct {
	output
	link                         string
	order, windowPs, windowShare flagNumber
	raman, efficiency            [2]flagNumber
}

func (f *sourceFlags) add(cmd *cobra.Command) {
	flags := cmd.Flags()
	flags.StringVar(&f.link, "link", "", "a scenario: say what the source can carry on its link")
	flags.StringVar(&f.dir, "out", "", "also write source.json and the report into this folder")
	flags.StringVar(&f.format, "format", "text", "what goes to standard output: "+sourceFormatNames()+" (csv: the density matrix)")
	flags.Var(&f.order, "order", "power scan: 1 where pairs grow as the power (down-conversion), 2 as its square (four-wave mixing)")
	flags.Var(&f.raman[0], "raman-alice", "power scan: linear noise in Alice's arm, photons per second and mW in the source; 0 for none")
	flags.Var(&f.raman[1], "raman-bob", "power scan: the same in Bob's arm")
	flags.Var(&f.efficiency[0], "efficiency-alice", "power scan: efficiency of the detector that counted in Alice's arm (default: that of the link's)")
	flags.Var(&f.efficiency[1], "efficiency-bob", "power scan: the same in Bob's arm")
	flags.Var(&f.windowShare, "window-share", "power scan: share of the pairs inside the coincidence window (default: all)")
	flags.Var(&f.windowPs, "window-ps", "delays: full width of the window that coincidences are counted in (default: twice the peak's width)")
}

func (f *sourceFlags) options() (o source.Options, err error) {
	o.WindowShare, o.WindowPs = f.windowShare.value(), f.windowPs.value()
	if order := f.order.at; order != nil {
		if *order != 1 && *order != 2 {
			return o, fmt.Errorf("--order %s is neither 1 nor 2", f.order.String())
		}
		o.Order = int(*order)
	}
	for arm, name := range [2]string{"alice", "bob"} {
		o.LinearNoiseHzPerMW[arm] = f.raman[arm].at
		o.DetectorEfficiency[arm] = f.efficiency[arm].at
		if e := f.efficiency[arm].at; e != nil && !(*e > 0 && *e <= 1) {
			return o, fmt.Errorf("--efficiency-%s %s is outside 0 to 1: write a fraction", name, f.efficiency[arm].String())
		}
		if r := f.raman[arm].at; r != nil && *r < 0 {
			return o, fmt.Errorf("--raman-%s %s is negative: photons per second and mW, 0 for none", name, f.raman[arm].String())
		}
	}
	for _, x := range []struct {
		name string
		of   *flagNumber
		most float64
	}{{"--window-share", &f.windowShare, 1}, {"--window-ps", &f.windowPs, mostWindowPs}} {
		if v := x.of.at; v != nil && !(*v > 0 && *v <= x.most) {
			return o, fmt.Errorf("%s %s is outside 0 to %g", x.name, x.of.String(), x.most)
		}
	}
	return o, nil
}

const mostWindowPs = 1e9

func (c *commands) sourceCommand() *cobra.Command {
	var f sourceFlags
	cmd := &cobra.Command{
		Use:   "source FILE",
		Short: "Say what a measured source is, and what it can carry on a link",
		Long: "Say what a measured source is, and with --link what it can carry on a scenario's link.\n" +
			"FILE is a scenario (.yaml), or a laboratory's CSV file, told apart by its header row:\n" +
			"a density matrix, counts of a tomography, a power scan, a delay histogram or a spectral map.\n\n" +
			"Exit status: 0 the file was understood, and with --link its need is met or none is stated;\n" +
			"1 with --link, any other outcome; 2 usage or input is wrong; 3 the program or its output\n" +
			"failed; 130 interrupted.",
		Example: "  pairspan source counts.csv\n  pairspan source counts.csv --link link.yaml --out report\n" +
			"  pairspan source scan.csv --order 2 --link link.yaml\n  pairspan source counts.csv --format csv > state.csv",
		Args: oneSourceFile,
		RunE: func(cmd *cobra.Command, args []string) error { return c.source(cmd, &f, args[0]) },
	}
	f.add(cmd)
	return cmd
}

// source reads, asks, writes the folder and then standard output.
func (c *commands) source(cmd *cobra.Command, f *sourceFlags, file string) error {
	var write func(io.Writer, *source.Result) error
	for _, format := range sourceFormats {
		if format.name == f.format {
			write = format.write
		}
	}
	if write == nil {
		return fmt.Errorf("--format %q is not one of %s", f.format, sourceFormatNames())
	}
	options, err := f.options()
	if err != nil {
		return err
	}
	r, err := source.Account(cmd.Context(), source.Request{File: file, On: f.link, Version: version, Options: options, Progress: progressOf(c.errs)})
	if err != nil {
		return err
	}
	if f.format == "csv" && !r.HasMatrix() {
		return fmt.Errorf("%s tells no density matrix, which is what --format csv prints; take text or json", file)
	}
	if err := c.deliver(f.dir,
		func(w io.Writer) error { return write(w, r) },
		func() (string, error) { return report.SourceFolder(f.dir, r) }); err != nil {
		return err
	}
	if f.link != "" {
		c.status = status(r.Link.Outcome)
	}
	return nil
}

// oneSourceFile asks for exactly one file.
func oneSourceFile(cmd *cobra.Command, args []string) error {
	if len(args) != 1 {
		return fmt.Errorf("%s takes one laboratory file or scenario, not %d", cmd.CommandPath(), len(args))
	}
	return nil
}
