package scenarios

import "embed"

// Examples holds the scenario files that are built in, and the laboratory
// files that they name.
//
//go:embed *.yaml *.csv
var Examples embed.FS
