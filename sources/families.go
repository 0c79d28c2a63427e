package sources

// Werner returns p |Φ+><Φ+| + (1 − p) I/4, p from −1/3 to 1 ([1]): the same
// error (1 − p)/2 in every basis, concurrence max(0, (3p − 1)/2).
//
// [1] Werner (1989). "Quantum states with Einstein-Podolsky-Rosen correlations admitting a hidden-variable model". Phys. Rev. A 40, 4277.
func Werner(p float64) DensityMatrix {
	p = within(p, -1.0/3, 1)
	rest := complex((1-p)/4, 0)
	rho := bell(p, p)
	for i := range rho {
		rho[i][i] += rest
	}
	return rho
}

// AtWorstState returns, of all states of concurrence c from 0 to 1, one with the
// largest errors, (1 − c)/2 in both bases however the analysers are aligned:
//
//	c |Φ+><Φ+| + a |HV><HV| + (1 − c − a) |HH><HH|
//
// with a = 1 − c, so that the last term vanishes, for c ≥ 1/3. Below that |HV>
// alone would agree too well in H/V; a = (1 + c)/2 holds T33 at −c.
func AtWorstState(c float64) DensityMatrix {
	c = within(c, 0, 1)
	a := min(1-c, (1+c)/2)
	rho := bell(c, c)
	rho[1][1] = complex(a, 0)
	rho[0][0] += complex(1-c-a, 0)
	return rho
}

// Dephased returns |Φ+> after pure dephasing to the concurrence c, 0 to 1: no
// error in H/V, (1 − c)/2 in D/A.
func Dephased(c float64) DensityMatrix {
	return bell(1, within(c, 0, 1))
}

// bell returns weight/2 (|HH><HH| + |VV><VV|) + coherence/2 (|HH><VV| + |VV><HH|).
func bell(weight, coherence float64) (rho DensityMatrix) {
	w, c := complex(weight/2, 0), complex(coherence/2, 0)
	rho[0][0], rho[3][3] = w, w
	rho[0][3], rho[3][0] = c, c
	return rho
}
