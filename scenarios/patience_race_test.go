//go:build race

package scenarios

import "time"

// patience is longer under the race detector, which slows everything tenfold.
const patience = 10 * time.Second
