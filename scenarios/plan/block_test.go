package plan

import (
	"math"
	"testing"

	"pairspan/keyrate"
	"pairspan/scenarios"
)

// blockLinks make key from blocks, in various ways.
func blockLinks(t testing.TB) map[string]*scenarios.Scenario {
	small := set{"finite_key", "{ sifted_bits_per_block: 2.0e+4, epsilon_total: 1.0e-8 }"}
	authenticated := set{"finite_key", "{ sifted_bits_per_block: 3.0e+5, epsilon_total: 1.0e-10, authentication_bits_per_block: 640 }"}
	return map[string]*scenarios.Scenario{
		"plain":                 read(t, blocks, set{"duty_cycle", "0.8"}),
		"small":                 read(t, small),
		"authenticated":         read(t, authenticated, set{"duty_cycle", "0.5"}),
		"fixed window":          read(t, blocks, set{"window_ps", "500"}),
		"biased":                read(t, blocks, set{"key_basis_share", "0.9"}),
		"share searched":        read(t, blocks, set{"key_basis_share", "auto"}),
		"all searched":          read(t, authenticated, set{"key_basis_share", "auto"}, set{"source.pair_rate_hz", "auto"}),
		"active":                read(t, blocks, set{"arms.alice.basis_choice", "active"}, set{"arms.bob.basis_choice", "active"}),
		"visibilities":          read(t, blocks, set{"source.state", "{ visibility: { hv: 0.97, da: 0.93 } }"}),
		"pulsed":                parse(t, pulsedBase, blocks),
		"far":                   read(t, blocks, set{"arms.bob.length_km", "88"}),
		"block too small":       read(t, set{"finite_key", "{ sifted_bits_per_block: 1000, epsilon_total: 1.0e-10 }"}),
		"more than day's block": read(t, set{"finite_key", "{ sifted_bits_per_block: 1.0e+10, epsilon_total: 1.0e-10 }"}),
	}
}

// TestBlockAddsUp compares a block's figures with the rates, which know no
// block: bits a block are the rate times the time that one takes.
func TestBlockAddsUp(t *testing.T) {
	for name, s := range blockLinks(t) {
		a := newAsker(s)
		b, now := a.block(), a.at(s.DistanceKm(), judged, nil)
		siftS := b.SiftedBits / now.rate.SiftedBps()
		if b.SecretBits != math.Floor(b.SecretBits) || !within(b.SecretBits, now.rate.FiniteBps*siftS, 1e-12) {
			t.Errorf("%s: %v secret bits, the rate gives %v", name, b.SecretBits, now.rate.FiniteBps*siftS)
		}
		usable := now.rate.UsableBps
		if (b.FirstKeyS != nil) != (usable > 0) || usable > 0 && !within((b.SecretBits-b.AuthenticationBits) / *b.FirstKeyS, usable, 1e-12) {
			t.Errorf("%s: first key after %v, %v bit/s", name, b.FirstKeyS, usable)
		}
		if !within(b.AES256PerHour*256, usable*3600, 1e-12) || !within(b.AES256PerDay, 24*b.AES256PerHour, 1e-12) {
			t.Errorf("%s: %v and %v AES-256 keys of %v bit/s", name, b.AES256PerHour, b.AES256PerDay, usable)
		}
		if now.rate.FiniteBps > b.SameBasisSecretBps || b.SameBasisSecretBps > now.rate.SecretBps {
			t.Errorf("%s: %v bit/s of blocks, %v of the key basis alone, %v of both", name, now.rate.FiniteBps, b.SameBasisSecretBps, now.rate.SecretBps)
		}
	}
}

// TestSmallestBlockPutBack plans with the smallest block, and with one bit less.
func TestSmallestBlockPutBack(t *testing.T) {
	for name, s := range blockLinks(t) {
		smallest := *newAsker(s).block().SmallestSiftedBits
		for _, step := range []struct {
			bits float64
			key  bool
		}{{smallest, true}, {smallest - 1, false}} {
			c := s.Clone()
			c.SiftedBitsPerBlock = step.bits
			a := newAsker(c)
			now := a.at(c.DistanceKm(), judged, nil)
			usable := now.rate.UsableBps / c.DutyCycle / now.rate.SiftedBps() * step.bits
			if (usable > 0) != step.key {
				t.Errorf("%s: a block of %v leaves %v bits", name, step.bits, usable)
			}
		}
		if smallest != math.Floor(smallest) {
			t.Errorf("%s: a block of %v bits", name, smallest)
		}
	}
}

// TestBestBlock: it sifts within a day, and of all shares and blocks that do
// none makes more; half of it makes less.
func TestBestBlock(t *testing.T) {
	for name, s := range blockLinks(t) {
		a := newAsker(s)
		b := a.block()
		if name == "far" && b.BestSiftedBits == nil {
			t.Errorf("%s: no key within a day", name)
		}
		c := s.Clone()
		c.SiftedBitsPerBlock, c.KeyBasisShare, c.KeyShareAuto = *b.BestSiftedBits, *b.BestKeyBasisShare, false
		back := newAsker(c).at(c.DistanceKm(), judged, nil)
		if !within(back.rate.UsableBps, *b.BestUsableRateBps, 1e-4) {
			t.Errorf("%s: put back %v bit/s, want %v", name, back.rate.UsableBps, *b.BestUsableRateBps)
		}
		now, ok := a.bestBlock(a.at(s.DistanceKm(), judged, nil))
		if !ok || now.rate.UsableBps != *b.BestUsableRateBps {
			t.Errorf("%s: %v bit/s, want %v", name, now.rate.UsableBps, *b.BestUsableRateBps)
		}
		if days := *b.BestSiftedBits / (now.rate.SiftedBps() * c.DutyCycle * 86400); days > 1 || days < 0.99 {
			t.Errorf("%s: the block takes %v days", name, days)
		}
		most := 0.0
		for q := 0.5; q < 0.99; q += 0.0035 {
			p := keyrate.OperatingPoint{PairRateHz: now.setting.PairRateHz, WindowS: now.setting.WindowS, KeyShare: q}
			l := now.link
			r := l.Key(p)
			for _, of := range []float64{1, 0.9, 0.5, 0.1} {
				l.BlockBits = math.Floor(of * r.SiftedBps() * c.DutyCycle * 86400)
				r := l.Key(p)
				most = max(most, r.UsableBps)
			}
		}
		// A block of three digits, rounded down, may be a hundredth smaller.
		if most > 1.002**b.BestUsableRateBps {
			t.Errorf("%s: %v bit/s with %v bits and a share of %v, a grid finds %v", name, *b.BestUsableRateBps, *b.BestSiftedBits, *b.BestKeyBasisShare, most)
		}
		l := now.link
		for _, step := range []struct {
			bits   float64
			enough bool
		}{{*b.EnoughSiftedBits, true}, {*b.EnoughSiftedBits - 1, false}} {
			l.BlockBits = step.bits
			if r := l.Key(now.setting); r.UsableBps >= 0.95**b.BestUsableRateBps != step.enough {
				t.Errorf("%s: a block of %v makes %v of %v", name, step.bits, r.UsableBps, *b.BestUsableRateBps)
			}
		}
	}
}

// TestBlocksTendToTheKeyBasisAlone.
func TestBlocksTendToTheKeyBasisAlone(t *testing.T) {
	c := filed(t, set{"finite_key", "{ sifted_bits_per_block: 1.0e+13, epsilon_total: 1.0e-10 }"})
	if got, want := *c.Answer.UsableRateBps, c.Block.SameBasisSecretBps; !within(got, want, 1e-3) || got > want {
		t.Errorf("%v bit/s of endless blocks, %v of the key basis alone", got, want)
	}
	if *c.Block.BestUsableRateBps < *c.Answer.UsableRateBps {
		t.Errorf("%v bit/s with the best share", *c.Block.BestUsableRateBps)
	}
}

// TestNoBlock: nothing is said of blocks where there are none, no state or no key.
func TestNoBlock(t *testing.T) {
	if b := newAsker(read(t)).block(); b != nil {
		t.Errorf("no blocks: %+v", *b)
	}
	b := newAsker(read(t, blocks, set{"source.state.tangle", "0.3"})).block()
	if b.FirstKeyS != nil || b.SmallestSiftedBits != nil || b.BestSiftedBits != nil || b.BestKeyBasisShare != nil || b.BestUsableRateBps != nil || b.EnoughSiftedBits != nil ||
		b.SecretBits != 0 || b.AES256PerDay != 0 || b.SameBasisSecretBps != 0 || b.Sentence != "Blocks of 1e6 sifted bits leave no key at worst. No block leaves any." {
		t.Errorf("no entanglement: %+v", *b)
	}
	// So little light that a day is too short for a block.
	dim := newAsker(read(t, blocks, set{"arms.bob.fixed_loss_db", "65"}, set{"detectors.free_running.dark_counts_hz", "0.001"})).block()
	if dim.SmallestSiftedBits == nil || dim.BestSiftedBits != nil {
		t.Errorf("in the dark: %s", dim.Sentence)
	}
}
