package plan

import (
	"strings"

	"pairspan/scenarios"
)

// What an input of the link is known by.
const (
	Measured   = "measured"
	FromPaper  = "document" // a data sheet, a drawing, a standard, a quotation
	Unreferred = "stated"   // without a word on where it comes from
	Assumed    = "assumed"  // as its origin says
	ByDefault  = "default"
)

// knownBy says what an input is known by; nil for what is no input of the
// link but a wish, a setting or the name of something described elsewhere.
//
// An origin decides by its words. Without one a standard deviation counts as
// a measurement, since nobody else has reason to state it, and so do the
// entries that hold measurements by their meaning.
func knownBy(e *Entry) *string {
	switch {
	case !isInput(e.Entry):
		return nil
	case e.DefaultSource != nil && scenarios.FromMap(*e.DefaultSource):
		return new(Measured)
	case e.DefaultSource != nil:
		return new(ByDefault)
	case e.Origin != nil:
		return new(originSays(*e.Origin))
	case e.SD != nil || isMeasurement(e.Entry):
		return new(Measured)
	}
	return new(Unreferred)
}

// isInput reports whether an entry describes the link itself.
func isInput(entry string) bool {
	switch entry {
	case "clock_jitter_fwhm_ps", "error_correction_f", "duty_cycle":
		return true
	}
	last := entry[strings.LastIndexByte(entry, '.')+1:]
	switch groupOf(entry) {
	case "source":
		return !strings.Contains(entry, ".detector.")
	case "arms.alice", "arms.bob":
		return last != "detector"
	}
	return strings.HasPrefix(entry, "detectors.") && last != "class" && !isPrice(entry)
}

// isPrice reports whether an entry speaks of money.
func isPrice(entry string) bool {
	return strings.HasSuffix(entry, "price") || entry == "need.budget"
}

// isMeasurement reports whether an entry holds a measurement by its meaning.
func isMeasurement(entry string) bool {
	switch entry {
	case "source.state.density_matrix", "source.state.counts", "source.state.measured_car", "source.power_scan.file",
		"source.delays.file", "source.spectral_map.file":
		return true
	}
	return strings.HasPrefix(entry, "source.counted.") || strings.HasSuffix(entry, ".measured_loss_db")
}

// Beginnings of words, in any case. What says that nothing was measured
// counts before what speaks of measuring.
var (
	assumedWords  = []string{"assum", "guess", "estimat", "typical", "expect", "placeholder", "rule of thumb", "not measured", "not yet", "to be measured"}
	measuredWords = []string{"measur", "calibrat", "tomograph", "counted", "reflectomet", "otdr", "power meter", "recorded"}
)

// originSays sorts an origin by its words.
func originSays(text string) string {
	text = strings.ToLower(text)
	switch {
	case containsAny(text, assumedWords):
		return Assumed
	case containsAny(text, measuredWords):
		return Measured
	}
	return FromPaper
}

func containsAny(text string, words []string) bool {
	for _, w := range words {
		if strings.Contains(text, w) {
			return true
		}
	}
	return false
}
