package report

import (
	"math"
	"strings"
	"testing"
)

func TestDigits(t *testing.T) {
	for _, c := range []struct {
		v    float64
		n    int
		want string
	}{
		{0, 3, "0"},
		{6.2, 3, "6.2"},
		{101, 3, "101"},
		{394.4, 3, "394"},
		{999.9, 3, "1000"},
		{12345, 3, "12300"},
		{0.05, 3, "0.05"},
		{-4.25, 2, "−4.2"},
		{1e-9, 3, "1×10⁻⁹"},
		{3.14159e12, 3, "3.14×10¹²"},
		{-2e-7, 1, "−2×10⁻⁷"},
		{math.NaN(), 3, none},
		{math.Inf(1), 3, none},
		{0.00012345, 2, "0.00012"},
		{9999999, 3, "1×10⁷"},
	} {
		if got := digits(c.v, c.n); got != c.want {
			t.Errorf("digits(%g, %d) = %s, want %s", c.v, c.n, got, c.want)
		}
	}
}

func TestUnits(t *testing.T) {
	for _, c := range []struct{ got, want string }{
		{bitRate(394.2), "394_bit/s"},
		{bitRate(999.7), "1000_bit/s"},
		{bitRate(12340), "12_300_bit/s"},
		{bitRate(0), "0_bit/s"},
		{bitRate(4.6e6), "4_600_000_bit/s"},
		{bitRate(9999.6), "10_000_bit/s"},
		{bitRate(0.0345), "0.0345_bit/s"},
		{countHz(2.5e9), "2_500_000_000_Hz"},
		{countHz(3e12), "3×10¹²_Hz"},
		{grouped(-123456, 3), "−123_000"},
		{perCent(0.129), "12.9_%"},
		{perCent(0.0046), "0.46_%"},
		{perCent(0), "0_%"},
		{perCent(0.009965), "1.0_%"},
		{perCent(0.5), "50.0_%"},
		{share(0.5), "50_%"},
		{decibels(2.14), "2.1_dB"},
		{decibels(-4.2), "−4.2_dB"},
		{decibels(0.04), "0.04_dB"},
		{marginText(-1e-9), "0_dB"},
		{km(6.25), "6.25_km"},
		{decimals(-0.004, 2), "0.00"},
	} {
		if want := strings.ReplaceAll(c.want, "_", nbsp); c.got != want {
			t.Errorf("%s, want %s", c.got, want)
		}
	}
}

// A rate just below the need must not read as the need.
func TestAgainstTellsARateFromTheNeed(t *testing.T) {
	need := 256.0
	for _, c := range []struct {
		rate float64
		want string
	}{{394.4, "394"}, {255.8, "255.8"}, {255.97, "255.97"}, {256.0001, "256.0001"}, {256, "256"}} {
		if got, want := against(c.rate, &need), c.want+nbsp+"bit/s"; got != want {
			t.Errorf("%g of %g reads %s, want %s", c.rate, need, got, want)
		}
	}
	if got := against(255.8, nil); got != "256"+nbsp+"bit/s" {
		t.Errorf("without a need %s", got)
	}
}

func TestOrdinal(t *testing.T) {
	for n, want := range map[int]string{2: "2nd", 3: "3rd", 5: "5th", 11: "11th", 12: "12th", 21: "21st", 113: "113th"} {
		if got := ordinal(n); got != want {
			t.Errorf("%s, want %s", got, want)
		}
	}
}
