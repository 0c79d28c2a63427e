package plan

import (
	"fmt"

	"pairspan/scenarios"
)

// needs puts the need in all its forms; nil without one.
func needs(s *scenarios.Scenario) *Needs {
	bps := s.Need()
	if !scenarios.Stated(bps) {
		return nil
	}
	n := &Needs{
		SecretRateBps:  bps,
		Connections:    1,
		KeyBitsPerDay:  bps * scenarios.SecondsPerDay,
		StatedAs:       "need.secret_rate_bps",
		AES256RenewalS: scenarios.AES256Bits / bps,
		Budget:         number(s.Budget),
	}
	switch { // as stated, to the last digit
	case scenarios.Stated(s.AES256RenewalS):
		n.StatedAs, n.AES256RenewalS, n.Connections = "need.aes256_renewal_s", s.AES256RenewalS, s.EncryptedConnections
	case scenarios.Stated(s.KeyBitsPerDay):
		n.StatedAs, n.KeyBitsPerDay = "need.key_bits_per_day", s.KeyBitsPerDay
	}
	return n
}

// neededBps is the need in bit/s: to the digit where it was stated so, else
// with as many digits as it takes to tell it from a rate.
func (a *asker) neededBps(rate float64) string {
	if scenarios.Stated(a.s.NeedBps) {
		return plain(a.need)
	}
	return against(a.need, rate)
}

// needed is the need beside a rate, with what it was stated for, and where.
func (a *asker) needed(rate float64, where string) string {
	figure := a.neededBps(rate) + " bit/s "
	switch use := a.use(); {
	case use == "":
		return figure + "needed" + where
	case where == "":
		return figure + use
	default:
		return figure + use + "," + where
	}
}

// use says what takes the need, in the form in which it was stated; "" for a
// rate, which is a form of its own.
func (a *asker) use() string {
	switch s := a.s; {
	case scenarios.Stated(s.AES256RenewalS) && s.EncryptedConnections == 1:
		return fmt.Sprintf("that renewing an AES-256 key every %s s takes", plain(s.AES256RenewalS))
	case scenarios.Stated(s.AES256RenewalS):
		return fmt.Sprintf("that %s connections renewing AES-256 keys every %s s take", plain(s.EncryptedConnections), plain(s.AES256RenewalS))
	case scenarios.Stated(s.KeyBitsPerDay):
		return fmt.Sprintf("that %s bits a day take", short(s.KeyBitsPerDay))
	}
	return ""
}

// aim is what a state would have to be enough for.
func (a *asker) aim() string {
	switch {
	case a.need == 0:
		return "any key"
	case a.use() == "":
		return plain(a.need) + " bit/s"
	}
	return "the " + a.needed(0, "")
}
