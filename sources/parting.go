package sources

// A Parting is a pair of pass bands seen as what it does to pairs one by one.
// With a share p of the pairs passing both bands and shares u_A and u_B of them
// leaving Alice or Bob alone with a photon, the light is that of
//
//	B (p + u_A)(p + u_B)/p
//
// pairs per second, B those of the whole map, which lose Alice's photon on the
// way with probability u_B/(p + u_B), and Bob's with u_A/(p + u_A), independently:
// both then arrive p B times, Alice's alone u_A B times, Bob's alone u_B B times.
// Of Poisson light, pulsed or not, this is the same as light without a partner
// beside the pairs; of a few thermal modes the photons that are alone keep their
// statistics. It grows with the pump.
type Parting struct {
	Pairs  float64    // per pair of the whole map, at least the band's share
	Passes [2]float64 // chance that Alice's and that Bob's photon passes, above 0 to 1
}

// Parting returns what a band with pairs does to them.
func (b *Band) Parting() Parting {
	alice, bob := b.Share+b.UnpairedShare[0], b.Share+b.UnpairedShare[1]
	return Parting{alice / b.Share * bob, [2]float64{b.Share / bob, b.Share / alice}}
}
