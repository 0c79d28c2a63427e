package plan

import "fmt"

// blockSentence is the finite-size key in words.
func (a *asker) blockSentence(b *Block, usableBps float64) string {
	s := fmt.Sprintf("Blocks of %s sifted bits leave no key%s.", short(b.SiftedBits), a.forSure())
	if b.FirstKeyS != nil {
		s = fmt.Sprintf("A block of %s sifted bits leaves %s secret bits%s%s and is full after %s: %s AES-256 keys an hour, %s a day.",
			short(b.SiftedBits), short(b.SecretBits), a.forSure(), a.authentication(), duration(*b.FirstKeyS), short(b.AES256PerHour), short(b.AES256PerDay))
	}
	if b.SmallestSiftedBits == nil {
		return s + " No block leaves any."
	}
	s += fmt.Sprintf(" The smallest block with any key has %s.", short(*b.SmallestSiftedBits))
	if b.BestSiftedBits == nil {
		return s + " A day does not sift enough for a key."
	}
	s += fmt.Sprintf(" A day's block of %s with a key basis share of %s would make %s", short(*b.BestSiftedBits), bare(*b.BestKeyBasisShare), bps(*b.BestUsableRateBps))
	if usableBps > 0 {
		s += ", " + two(*b.BestUsableRateBps/usableBps) + " times as much"
	}
	return s + fmt.Sprintf("; blocks from %s on make 95 %% of that.", short(*b.EnoughSiftedBits))
}

// forSure marks what was judged at worst.
func (a *asker) forSure() string {
	if a.given {
		return ""
	}
	return " at worst"
}

func (a *asker) authentication() string {
	if bits := a.s.AuthenticationBitsPerBlock; bits > 0 {
		return fmt.Sprintf(" (%s of them for authentication)", short(bits))
	}
	return ""
}

// duration is a time in seconds, and in hours too where it is long.
func duration(s float64) string {
	if s < 2*secondsPerHour {
		return bare(s) + " s"
	}
	return fmt.Sprintf("%s s (%s h)", bare(s), bare(s/secondsPerHour))
}
