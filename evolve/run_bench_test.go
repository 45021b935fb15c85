package evolve

import (
	"context"
	"testing"
)

// BenchmarkVolcanicCycle times a whole history: 494 steps, 1501 times of the
// cadence.
func BenchmarkVolcanicCycle(b *testing.B) {
	s := shipped(b, "volcanic-cycle")
	for b.Loop() {
		if _, err := Run(context.Background(), s, Options{}); err != nil {
			b.Fatal(err)
		}
	}
}
