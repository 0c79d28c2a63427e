package sources

import "math"

// Figures are the figures of merit of a two-photon state, or one standard
// deviation of each.
type Figures struct {
	Tangle                  float64                        // 0 to 1
	Concurrence             float64                        // 0 to 1
	Fidelity                float64                        // to the nearest maximally entangled state, 1/4 to 1
	Purity                  float64                        // 1/4 to 1
	Entropy                 float64                        // bits, 0 to 2
	LinearEntropy           float64                        // 0 to 1
	EntanglementOfFormation float64                        // 0 to 1
	CHSH                    float64                        // largest value of the sum, 0 to 2√2
	QBERLab                 struct{ HV, DA, RL float64 }   // in the laboratory's axes, 0 to 1/2
	QBERAligned             struct{ Key, Check float64 }   // with the analysers aligned, 0 to 1/2
	SecretFraction          struct{ Lab, Aligned float64 } // of the sifted bits, 0 to 1; see SecretFraction
}

// Figures returns the state's figures of merit.
func (rho DensityMatrix) Figures() (f Figures) {
	f.Concurrence = rho.Concurrence()
	f.Tangle = f.Concurrence * f.Concurrence
	f.Fidelity = rho.Fidelity()
	f.Purity = rho.Purity()
	f.Entropy = rho.Entropy()
	f.LinearEntropy = rho.LinearEntropy()
	f.EntanglementOfFormation = rho.EntanglementOfFormation()
	f.CHSH = rho.CHSH()
	lab, aligned := &f.QBERLab, &f.QBERAligned
	lab.HV, lab.DA, lab.RL = rho.LabErrors()
	aligned.Key, aligned.Check = rho.AlignedErrors()
	f.SecretFraction.Lab = idealSecretFraction(lab.HV, lab.DA)
	f.SecretFraction.Aligned = idealSecretFraction(aligned.Key, aligned.Check)
	return f
}

// idealSecretFraction returns how much secret key a sifted bit gives at best,
// max(0, 1 − h(e1) − h(e2)), e1 and e2 the bit errors of the two bases, 0 to
// 1/2, and h the binary entropy: error correction at its limit, no other error,
// many bits ([1]).
//
// [1] Shor, Preskill (2000). "Simple proof of security of the BB84 quantum key distribution protocol". Phys. Rev. Lett. 85, 441.
func idealSecretFraction(e1, e2 float64) float64 {
	return max(0, 1-binaryEntropy(e1)-binaryEntropy(e2))
}

// binaryEntropy returns h(p) = −p log2 p − (1 − p) log2(1 − p).
func binaryEntropy(p float64) float64 { return entropyTerm(p) + entropyTerm(1-p) }

// places returns where each figure stands, in the order of the fields.
func (f *Figures) places() [15]*float64 {
	return [...]*float64{
		&f.Tangle, &f.Concurrence, &f.Fidelity, &f.Purity, &f.Entropy, &f.LinearEntropy, &f.EntanglementOfFormation, &f.CHSH,
		&f.QBERLab.HV, &f.QBERLab.DA, &f.QBERLab.RL, &f.QBERAligned.Key, &f.QBERAligned.Check,
		&f.SecretFraction.Lab, &f.SecretFraction.Aligned,
	}
}

// List returns the figures in the order of the fields.
func (f Figures) List() []float64 {
	var list []float64
	for _, place := range f.places() {
		list = append(list, *place)
	}
	return list
}

// FiguresOf returns the figures in a list as List returns it; NaN where the list
// ends too soon.
func FiguresOf(list []float64) (f Figures) {
	for i, place := range f.places() {
		*place = math.NaN()
		if i < len(list) {
			*place = list[i]
		}
	}
	return f
}

// Description is what a state is, for one who has to set up a link with it.
type Description struct {
	Figures
	BellState    string  // the nearest Bell state in the laboratory's axes: "Phi+", "Phi-", "Psi+" or "Psi-"
	BellFidelity float64 // the fidelity with it, 1/4 to 1
	Alignment    Alignment
}

// Describe returns what the state is.
func Describe(rho DensityMatrix) Description {
	d := Description{Figures: rho.Figures(), Alignment: rho.Alignment()}
	d.BellState, d.BellFidelity = rho.NearestBell()
	return d
}

// NearestBell returns the Bell state nearest to the state in the laboratory's
// axes, and the fidelity with it, 1/4 to 1: Phi± = (HH ± VV)/√2, Psi± =
// (HV ± VH)/√2.
func (rho DensityMatrix) NearestBell() (name string, fidelity float64) {
	same, other := real(rho[0][0]+rho[3][3])/2, real(rho[1][1]+rho[2][2])/2
	phi, psi := real(rho[0][3]), real(rho[1][2])
	fidelity = math.Inf(-1)
	for _, bell := range []struct {
		name     string
		fidelity float64
	}{{"Phi+", same + phi}, {"Phi-", same - phi}, {"Psi+", other + psi}, {"Psi-", other - psi}} {
		if bell.fidelity > fidelity {
			name, fidelity = bell.name, bell.fidelity
		}
	}
	return name, min(1, fidelity)
}
