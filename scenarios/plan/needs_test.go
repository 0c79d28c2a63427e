package plan

import (
	"strings"
	"testing"

	"pairspan/scenarios"
)

func needing(t testing.TB, need string, changes ...set) *scenarios.Scenario {
	return parse(t, strings.Replace(base, "need: { secret_rate_bps: 100 }", "need: { "+need+" }", 1), changes...)
}

// TestNeedsInAllForms: the same need, however it is stated.
func TestNeedsInAllForms(t *testing.T) {
	// Four connections, each with a key of 256 bits every 60 s: 17.07 bit/s,
	// or 1474560 bits in the 86400 s of a day.
	for _, row := range []struct {
		need string
		want Needs
	}{
		{"aes256_renewal_s: 60, encrypted_connections: 4", Needs{AES256RenewalS: 60, Connections: 4, StatedAs: "need.aes256_renewal_s"}},
		{"aes256_renewal_s: 15", Needs{AES256RenewalS: 15, Connections: 1, StatedAs: "need.aes256_renewal_s"}},
		{"key_bits_per_day: 1474560", Needs{AES256RenewalS: 15, Connections: 1, StatedAs: "need.key_bits_per_day"}},
		{"secret_rate_bps: 17.066666666666666", Needs{AES256RenewalS: 15, Connections: 1, StatedAs: "need.secret_rate_bps"}},
	} {
		got := needs(needing(t, row.need))
		if !within(got.SecretRateBps, 17.066666666666666, 1e-14) || !within(got.KeyBitsPerDay, 1474560, 1e-14) || !within(got.AES256RenewalS, row.want.AES256RenewalS, 1e-14) ||
			got.Connections != row.want.Connections || got.StatedAs != row.want.StatedAs || got.Budget != nil {
			t.Errorf("%s: %+v", row.need, *got)
		}
	}
	if got := needs(needing(t, "key_bits_per_day: 3.0e+7, budget: 60000")); got.KeyBitsPerDay != 3e7 || *got.Budget != 60000 {
		t.Errorf("%+v", *got)
	}
	if p := planned(t); p.Needs == nil || p.Needs.SecretRateBps != 100 {
		t.Errorf("the plan needs %v", p.Needs)
	}
	if got := needs(parse(t, strings.Replace(base, "need: { secret_rate_bps: 100 }\n", "", 1))); got != nil {
		t.Errorf("no need, and yet %+v", *got)
	}
}

// TestPublishedKeyUse: an AES-256 key every 60 s is 4.27 bit/s (arithmetic).
func TestPublishedKeyUse(t *testing.T) {
	if got := needs(needing(t, "aes256_renewal_s: 60")).SecretRateBps; !within(got, 4.27, 1e-3) {
		t.Errorf("%v bit/s", got)
	}
}

// TestNeedInThePersonsForm pins the answers where the need is not a rate.
func TestNeedInThePersonsForm(t *testing.T) {
	var b strings.Builder
	for _, row := range []struct {
		need    string
		outcome Outcome
		changes []set
	}{
		{"aes256_renewal_s: 60, encrypted_connections: 4", Met, nil},
		{"aes256_renewal_s: 2", Met, nil},
		{"key_bits_per_day: 2.0e+7", Met, nil},
		{"aes256_renewal_s: 0.9, encrypted_connections: 3", MetIfNominal, nil},
		{"aes256_renewal_s: 1, encrypted_connections: 4", MetIfBest, nil},
		{"key_bits_per_day: 1.0e+8", NotMet, nil},
		{"aes256_renewal_s: 0.1", NotMet, []set{{"source.state", "{ visibility: { hv: 0.9, da: 0.9 } }"}}},
	} {
		c := answeredCase(needing(t, row.need, row.changes...))
		if c.Answer.Outcome != row.outcome {
			t.Errorf("%s: %s, want %s", row.need, c.Answer.Outcome, row.outcome)
		}
		b.WriteString(row.need + "\n    " + c.Answer.Sentence + "\n")
	}
	noState := func(need string) {
		text := strings.NewReplacer("  state: { tangle: 0.86 }\n", "", "secret_rate_bps: 100", need).Replace(base)
		b.WriteString("no state, " + need + "\n    " + answeredCase(parse(t, text)).Answer.Sentence + "\n")
	}
	noState("aes256_renewal_s: 60, encrypted_connections: 4")
	noState("key_bits_per_day: 1.0e+12")
	pinned(t, "needs.txt", b.String())
}

// TestNeedCloseToTheRate: 100.4 of 100.42 must not read as 100 of 100.
func TestNeedCloseToTheRate(t *testing.T) {
	usable := *answeredCase(read(t)).Answer.UsableRateBps
	c := answeredCase(needing(t, "key_bits_per_day: "+figure(86400*usable*1.0002)))
	want := against(usable, usable*1.0002) + " of the " + against(usable*1.0002, usable) + " bit/s that"
	if !strings.Contains(c.Answer.Sentence, want) {
		t.Errorf("%q does not say %q", c.Answer.Sentence, want)
	}
}
