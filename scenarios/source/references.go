package source

import "pairspan/scenarios/plan"

// references are the published sources of what is said of a source.
var references = []plan.Reference{
	{ID: "tomography", Text: "James et al., PRA 64, 052312 (2001): the state of two qubits from coincidence counts, linear inversion and maximum likelihood."},
	{ID: "fit-quality", Text: "Baker, Cousins, Nucl. Instrum. Methods 221, 437 (1984): chi-squared of Poisson counts."},
	{ID: "bootstrap", Text: "Efron, Tibshirani, An Introduction to the Bootstrap (Chapman & Hall, 1993), ch. 6: parametric bootstrap."},
	{ID: "tangle", Text: "Wootters, PRL 80, 2245 (1998): concurrence, tangle and entanglement of formation of two qubits."},
	{ID: "fidelity", Text: "Bennett et al., PRA 54, 3824 (1996): fidelity to the nearest maximally entangled state."},
	{ID: "fidelity-bound", Text: "Verstraete, Verschelde, PRA 66, 022307 (2002): bounds of the fidelity at a given concurrence."},
	{ID: "bell", Text: "Horodecki et al., PLA 200, 340 (1995): the greatest CHSH value of a two-qubit state."},
	{ID: "projection", Text: "Smolin et al., PRL 108, 070502 (2012): the physical state nearest to a measured matrix."},
	{ID: "secret-fraction", Text: "Shor, Preskill, PRL 85, 441 (2000): secret fraction of the sifted bits."},
	{ID: "heralding", Text: "Klyshko, Sov. J. Quantum Electron. 10, 1112 (1980): efficiencies from singles and coincidences."},
	{ID: "power-scan", Text: "Lin et al., PRA 75, 023803 (2007): pairs and one-photon noise told apart by their growth with the pump power."},
}
