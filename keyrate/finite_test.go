package keyrate

import (
	"math"
	"testing"
)

// Lim et al., PRL 126, 100501 (2021) on the data of Yin et al., Nature 582,
// 501 (2020): a block of 3100 sifted bits at QBER 4.51 %, f = 1.19, gives six
// bits at a total epsilon of 1e-6, some at 1e-5, none at 1e-7. Read in a
// secondary summary. The figures at the second decimal are ours, computed
// independently by a search over ξ and ν.
func TestPublishedBlock(t *testing.T) {
	for _, row := range []struct{ k, epsilon, bits, tolerance float64 }{
		{1692, 1e-6, 6.22, 0.005}, {1550, 1e-6, 3.26, 0.005}, {1550, 1e-5, 49.99, 0.005},
	} {
		b := Block{3100 - row.k, row.k, 0.0451, 0.0451, 1.19, row.epsilon / 2, row.epsilon / 2}
		if got := b.SecretBits(); math.Abs(got-row.bits) > row.tolerance {
			t.Errorf("k = %v at %v: %v bits, want %v", row.k, row.epsilon, got, row.bits)
		}
	}
}
