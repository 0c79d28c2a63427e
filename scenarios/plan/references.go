package plan

import "slices"

// references are the published sources of the formulas a plan uses.
var references = []Reference{
	{"protocol", "Bennett et al., PRL 68, 557 (1992): key from photon pairs measured in two bases; the sifting factor."},
	{"tangle", "Wootters, PRL 80, 2245 (1998): concurrence and tangle of two qubits."},
	{"fidelity-bound", "Verstraete, Verschelde, PRA 66, 022307 (2002); Verstraete, Wolf, PRL 89, 170401 (2002): bounds on correlations and fidelity at a given concurrence."},
	{"projection", "Smolin et al., PRL 108, 070502 (2012): the physical state nearest to a measured matrix."},
	{"slot-pulsed", "Ma et al., PRA 76, 012307 (2007): gain and error of a pulsed pair source with threshold detectors."},
	{"slot-continuous", "Neumann et al., PRA 104, 022406 (2021): coincidence window, accidentals and error of a continuous source."},
	{"dispersion-cancels", "Franson, PRA 45, 3126 (1992): dispersion of opposite sign in the two arms cancels."},
	{"fibre", "ITU-T G.652, with Appendix I for installed links, and ITU-T G.657: attenuation, dispersion and PMD."},
	{"silica", "Malitson, J. Opt. Soc. Am. 55, 1205 (1965): refractive index of fused silica."},
	{"dead-time", "Knoll, Radiation Detection and Measurement, ch. 4: non-paralysable dead time."},
	{"asymptotic-key", "Shor, Preskill, PRL 85, 441 (2000); Koashi, Preskill, PRL 90, 057902 (2003): secret fraction from bit and phase error."},
	{"finite-key", "Lim et al., PRL 126, 100501 (2021): finite-size key of a block with separate basis errors."},
	{"bell", "Horodecki et al., PLA 200, 340 (1995): the greatest CHSH value of a two-qubit state."},
}

// Cautions are said with every answer about a link or a source.
func Cautions() []Caution { return slices.Clone(cautions) }

// cautions are said with every plan.
var cautions = []Caution{
	{"trust", "A planned key rate is an estimate, not a security claim: it presumes honest devices that do what this model says, and says nothing of side channels. Keys that matter take certified devices and an assessment of the whole system."},
	{"light", "Pump and alignment lasers and fibres in service may carry invisible laser radiation (IEC 60825-1 and IEC 60825-2): never look into a fibre end or a connector. Measuring a loss or an optical power opens fibre ends: switch the light off before a connector is opened, cap what stays open, and treat every end as live; local rules and licensed persons decide."},
	{"cold", "Cooled detectors may use cryogens or closed cryostats: cold burns, asphyxiation and pressure. Local rules and trained persons decide."},
}
