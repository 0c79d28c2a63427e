//go:build !race

package scenarios

import "time"

// patience is how long any file may take to be refused or understood.
const patience = time.Second
