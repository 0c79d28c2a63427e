package plan

import "fmt"

// limitsSentence says what holds the link back, and by what factor.
func limitsSentence(d limited, most, km string) string {
	was, best := d.described.rate.UsableBps, d.best.rate.UsableBps
	state, detectors := d.state.rate.UsableBps, d.detectors.rate.UsableBps
	times := func(rate, over float64) string { return two(rate/over) + " times" }
	setting := "the setting is at its best"
	if was > 0 && best/was >= hardlyMore {
		setting = "the best setting makes " + times(best, was) + " the key of the link as described"
	}
	switch {
	case best == 0:
		return fromNothing(state, detectors, km)
	case most == "":
		return fmt.Sprintf("At %s neither setting nor state nor detectors hold this link back.", km)
	case was == 0:
		return fmt.Sprintf("At %s the setting holds this link back most: as described there is no key, at the best one %s; with it, perfect detectors would make %s as much and a perfect state %s.",
			km, bps(best), times(detectors, best), times(state, best))
	case most == "setting":
		return fmt.Sprintf("At %s the setting holds this link back most: the best one makes %s the key of the link as described; with it, perfect detectors would make %s as much and a perfect state %s.",
			km, times(best, was), times(detectors, best), times(state, best))
	case most == "state":
		return fmt.Sprintf("At %s the state of the pairs holds this link back most: a perfect one would make %s the key of the best setting, perfect detectors %s; %s.",
			km, times(state, best), times(detectors, best), setting)
	}
	return fmt.Sprintf("At %s the detectors hold this link back most: perfect ones would make %s the key of the best setting, a perfect state %s; %s.",
		km, times(detectors, best), times(state, best), setting)
}

// fromNothing is the sentence where no setting makes key.
func fromNothing(state, detectors float64, km string) string {
	switch {
	case state == 0 && detectors == 0:
		return fmt.Sprintf("At %s no setting makes key, nor would a perfect state or perfect detectors alone.", km)
	case state == 0:
		return fmt.Sprintf("At %s no setting makes key, nor would a perfect state; perfect detectors would make %s.", km, bps(detectors))
	case detectors == 0:
		return fmt.Sprintf("At %s no setting makes key, nor would perfect detectors; a perfect state would make %s.", km, bps(state))
	}
	return fmt.Sprintf("At %s no setting makes key; perfect detectors would make %s, a perfect state %s.", km, bps(detectors), bps(state))
}
