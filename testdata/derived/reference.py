"""Independent reference values for the planner's formulas; see README.md.

Everything is worked out from the physics with 60 digits or more, without any of the program's code.
Same run, same bytes: `python3 reference.py`.
"""
import csv
import math
import os
import sys

from mpmath import mp, mpf

sys.dont_write_bytecode = True  # leave nothing but the tables behind

import brute
import rows
from finite import finite, h2

mp.dps = 60
SLOT_DIGITS = 160  # 1 - noA - noB + noAB loses some 100 digits at 200 dB in both arms
C_NM_PER_PS = mpf("299792.458")
HERE = os.path.dirname(os.path.abspath(__file__))


# ---- one slot: the chance that a set of detectors stays silent, then inclusion and exclusion ----

def slot(mu, eta_a, eta_b, d_a, d_b, w, e, modes, digits=SLOT_DIGITS):
    """Gain, QBER and accidental gain of one slot with two threshold detectors an arm."""
    with mp.workdps(digits):
        mu, eta_a, eta_b, d_a, d_b, w, e, modes = map(mpf, (mu, eta_a, eta_b, d_a, d_b, w, e, modes))
        mean = [[mu * (1 - e) / 2, mu * e / 2], [mu * e / 2, mu * (1 - e) / 2]]  # pairs of kind (i, j)
        turn = [[mp.sqrt(1 - e), -mp.sqrt(e)], [mp.sqrt(e), mp.sqrt(1 - e)]]  # Bob's frame

        def silent(alice, bob):
            """Chance that these detectors (subsets of 0, 1) do not click."""
            noise = mp.exp(-d_a * len(alice) - d_b * len(bob))
            if mp.isinf(modes):  # each pair misses them independently: a Poisson number, thinned
                hit = mpf(0)
                for i in (0, 1):
                    for j in (0, 1):
                        a, b = eta_a * (i in alice), eta_b * (j in bob)
                        hit += mean[i][j] * (a + b - a * b * w)
                return noise * mp.exp(-hit)
            # Gaussian state: vacuum generating function det(1 + Z C)^-K of the modes a0 a1 b0* b1*, C the
            # normally ordered covariance, <a* a> = <b* b> = s, <a_i b_j> = sqrt(s (1 + s)) turn_ij.
            s = mu / (2 * modes)
            c = mp.sqrt(s * (1 + s))
            z = [eta_a * (i in alice) for i in (0, 1)] + [eta_b * (j in bob) for j in (0, 1)]
            m = mp.eye(4)
            for i in (0, 1):
                m[i, i] += z[i] * s
                m[2 + i, 2 + i] += z[2 + i] * s
                for j in (0, 1):
                    m[i, 2 + j] = z[i] * c * turn[i][j]
                    m[2 + j, i] = z[2 + j] * c * turn[i][j]
            return noise * mp.det(m) ** -modes

        no_a, no_b = silent((0, 1), ()), silent((), (0, 1))
        q = 1 - no_a - no_b + silent((0, 1), (0, 1))
        # With v the indicator of silence, Alice's bit as +1, -1, and 0 for none or a random one is v1 - v0.
        s = sum((1 if i == j else -1) * silent((i,), (j,)) for i in (0, 1) for j in (0, 1))
        return q, (1 - s / q) / 2 if q != 0 else mpf("0.5"), (1 - no_a) * (1 - no_b)


# ---- a whole link at one operating point ----

def window_share(window_ps, fwhm_ps):
    return mp.erf(mp.sqrt(mp.log(2)) * window_ps / fwhm_ps) if fwhm_ps else mpf(1)


def coherence_ps(wavelength_nm, bandwidth_nm):
    return mpf("0.441") * wavelength_nm ** 2 / (C_NM_PER_PS * bandwidth_nm)


def sigma_per_ps(wavelength_nm, bandwidth_nm):
    """Rms width of a Gaussian spectrum in angular frequency."""
    return 2 * mp.pi * C_NM_PER_PS * bandwidth_nm / wavelength_nm ** 2 / (2 * mp.sqrt(2 * mp.log(2)))


def pmd_shrink(mean_dgd_ps, sigma):
    a = mean_dgd_ps * mp.sqrt(mp.pi / 8)  # the Maxwell distribution's scale
    return (1 + 2 * (1 + (a * sigma) ** 2) ** mpf("-1.5")) / 3


def respond(n0, dead_s, afterpulsing):
    """Registered rate and live share; afterpulses are clicks too, so iterate until they agree."""
    m, before = n0, mpf(-1)
    while abs(m - before) > abs(m) * mpf(10) ** -55:
        before, clicks = m, n0 + afterpulsing * m
        m = clicks / (1 + clicks * dead_s)
    return m, 1 / (1 + (n0 + afterpulsing * m) * dead_s)


ARM_FIELDS = ("transmittance passive misalignment_error pmd_ps wavelength_nm bandwidth_fwhm_nm background_hz unpaired_hz "
              "efficiency dark_counts_hz jitter_fwhm_ps dead_time_ns afterpulsing dispersion_ps").split()
LINK_FIELDS = ("pulse_rate_hz pair_rate_hz modes e1 e2 window_ps key_share".split() + [s + k for s in ("a_", "b_") for k in ARM_FIELDS]
               + "clock_jitter_fwhm_ps pump_pulse_fwhm_ps f".split())
LINK_RESULTS = ("window_share live_a_key live_b_key counts_a_key_hz counts_b_key_hz singles_a_hz singles_b_hz coincidences_hz "
                "accidentals_hz sifted_key_hz sifted_check_hz qber_key qber_check secret_rate_bps").split()


def link(inputs):
    x = {k: mpf(v) for k, v in inputs.items()}
    arms = [{k: x[s + k] for k in ARM_FIELDS} for s in ("a_", "b_")]
    rate, pairs, tau, modes = x["pulse_rate_hz"], x["pair_rate_hz"], x["window_ps"] * mpf("1e-12"), x["modes"]
    pulsed, clock = rate > 0, x["clock_jitter_fwhm_ps"]
    slots = rate if pulsed else 1 / tau
    mu = pairs / slots
    shares = (x["key_share"], 1 - x["key_share"])  # of the key basis, of the check basis

    if pulsed:  # each arm against the clock
        own = [window_share(x["window_ps"], mp.norm([a["jitter_fwhm_ps"], clock, x["pump_pulse_fwhm_ps"], a["dispersion_ps"]]))
               for a in arms]
        w_pair, w = mpf(1), own[0] * own[1]
    else:  # one arm against the other
        spread = mp.norm([a["jitter_fwhm_ps"] for a in arms]
                         + [clock, max(coherence_ps(a["wavelength_nm"], a["bandwidth_fwhm_nm"]) for a in arms),
                            sum(a["dispersion_ps"] for a in arms)])
        own = [mpf(1), mpf(1)]
        w_pair = w = window_share(x["window_ps"], spread)

    def detector(a, basis):
        """One detector of this basis: registered rate, live share, noise counts per slot."""
        x_eta, q = a["transmittance"] * a["efficiency"], shares[basis] if a["passive"] else mpf(1)
        lone = a["unpaired_hz"] * x_eta * q / 2
        if not pulsed:
            light = pairs * x_eta * q / 2
        elif mp.isinf(modes):
            light = rate * -mp.expm1(-(mu * x_eta * q + 2 * lone / rate) / 2)
        else:
            light = rate * (1 - mp.exp(-lone / rate) * (1 + mu * x_eta * q / (2 * modes)) ** -modes)
        noise = a["dark_counts_hz"] + a["background_hz"] + (0 if pulsed else lone)
        dead = a["dead_time_ns"] * mpf("1e-9")
        if pulsed:  # between pulses nothing is lost
            dead = mp.floor(dead * rate + mpf("1e-9")) / rate
        m, live = respond(light + noise, dead, a["afterpulsing"])
        counts = (noise + a["afterpulsing"] * m) * tau
        if pulsed:  # made in the pulse, as the pairs are, and in the window with their chance
            counts += lone / rate * own[arms.index(a)]
        return m, live, counts

    det = [[detector(a, basis) for basis in (0, 1)] for a in arms]
    kept = mpf(1)
    for a in arms:
        kept *= (1 - 2 * a["misalignment_error"]) * pmd_shrink(a["pmd_ps"], sigma_per_ps(a["wavelength_nm"], a["bandwidth_fwhm_nm"]))

    def pair_of_bases(a_basis, b_basis):
        """Coincidences, QBER, accidentals with Alice in one basis and Bob in another."""
        error = (1 - (1 - 2 * x[("e1", "e2")[a_basis]]) * kept) / 2 if a_basis == b_basis else mpf("0.5")
        factor, eta = slots, []
        for a, basis, share, d in zip(arms, (a_basis, b_basis), own, det):
            eta.append(a["transmittance"] * a["efficiency"] * share * (shares[basis] if a["passive"] else 1))
            factor *= d[basis][1] * (1 if a["passive"] else shares[basis])
        q, qber, accidental = slot(mu, eta[0], eta[1], det[0][a_basis][2], det[1][b_basis][2], w_pair, error, modes)
        return factor * q, qber, factor * accidental

    every = {(i, j): pair_of_bases(i, j) for i in (0, 1) for j in (0, 1)}
    (key, e_key, _), (check, e_check, _) = every[0, 0], every[1, 1]
    secret = (key * max(mpf(0), 1 - x["f"] * h2(e_key) - h2(e_check)) + check * max(mpf(0), 1 - x["f"] * h2(e_check) - h2(e_key)))
    singles = [2 * d[0][0] + 2 * d[1][0] if a["passive"] else 2 * d[0][0] for a, d in zip(arms, det)]
    return [w, det[0][0][1], det[1][0][1], det[0][0][0], det[1][0][0], *singles, sum(v[0] for v in every.values()),
            sum(v[2] for v in every.values()), key, check, e_key, e_check, secret]


# ---- dispersion ----

def dispersion_g652(nm, zero_nm=1310, slope=mpf("0.092")):
    """ps/(nm km), the formula of ITU-T G.652."""
    return slope / 4 * (nm - mpf(zero_nm) ** 4 / nm ** 3)


def index_silica(um):
    """Malitson, J. Opt. Soc. Am. 55, 1205 (1965); coefficients from memory."""
    terms = (("0.6961663", "0.0684043"), ("0.4079426", "0.1162414"), ("0.8974794", "9.896161"))
    return mp.sqrt(1 + sum(mpf(b) * um ** 2 / (um ** 2 - mpf(l) ** 2) for b, l in terms))


def dispersion_silica(nm):
    """Material dispersion -(lambda/c) n'' in ps/(nm km)."""
    um = mpf(nm) / 1000
    return -um * mp.diff(index_silica, um, 2) * mpf(10) ** 12 / 299792458


# ---- the files ----

def close(x, y, relative):
    assert abs(x - y) <= relative * abs(y), (x, y)


def check():
    """The formulas above against photon-number sums, averages and published figures."""
    for row in rows.BRUTE:
        modes, e = row[-1], row[-2]
        by_sum = brute.by_pairs(*row) if math.isinf(modes) or e == 0 else brute.by_fock(*row)
        for x, y in zip(by_sum, slot(*row)):
            close(x, y, 1e-9)
    # Ma et al., PRA 76, 012307 (2007), figures from memory; they are of first order in dark counts.
    q, qber, _ = slot(0.1, 0.03, 0.145, 3.01e-6, 3.01e-6, 1, 0.015, 1)
    close(q, 4.8813723772e-4, 1e-4)
    close(q * qber, 2.6326639250e-5, 1e-4)
    # At low occupancy: true coincidences B eta_A eta_B w, accidentals S_A S_B tau (the same source as the window share).
    calm = dict(zip(LINK_RESULTS, link(rows.CALM)))
    expected = (1e6 * 0.16 ** 2 * calm["window_share"] * calm["live_a_key"] * calm["live_b_key"]
                + calm["singles_a_hz"] * calm["singles_b_hz"] * 300e-12)
    close(calm["coincidences_hz"], expected, 1e-4)
    # The mean over the Maxwell distribution of delays (scale 1, mean sqrt(8/pi)) of a Gaussian's overlap.
    overlap = mp.quad(lambda d: mp.sqrt(2 / mp.pi) * d ** 2 * mp.exp(-d ** 2 / 2) * mp.exp(-(d * mpf("0.7")) ** 2 / 2), [0, 2, 5, 20, 60])
    close(pmd_shrink(mp.sqrt(8 / mp.pi), mpf("0.7")), (1 + 2 * overlap) / 3, 1e-30)
    close(window_share(1, 1), mpf("0.760968"), 1e-6)  # Neumann et al., PRA 104, 022406 (2021), from memory
    close(respond(mpf(10) ** 6, mpf("50e-9"), mpf(0))[0], 952381, 1e-6)  # Knoll, Radiation Detection and Measurement, ch. 4
    close(dispersion_g652(mpf(1550)), 17.461, 1e-4)  # ITU-T G.652
    assert dispersion_silica(1272) < 0 < dispersion_silica(1274)  # Malitson 1965: zero at 1273 nm, from memory


def write(name, header, lines):
    """Inputs as repr, so that they read back as the same doubles; values of mpmath with 25 digits."""
    with open(os.path.join(HERE, name), "w", newline="") as out:
        table = csv.writer(out, lineterminator="\n")
        table.writerow(header)
        for line in lines:
            table.writerow([mp.nstr(v, 25) if isinstance(v, mpf) else v if isinstance(v, str) else repr(v) for v in line])


def slot_line(row):
    values = slot(*row)
    for x, y in zip(values, slot(*row, digits=SLOT_DIGITS + 60)):
        close(x, y, mpf(10) ** -40)
    return [*row, *values]


def finite_line(row):
    n, k, *rest = row
    return [n + k, n, k, *rest, *(mp.nstr(v, 12) for v in finite(*row))]


def timing_lines():
    for t in (0.05, 0.5, 1.0, 1.189, 2.0, 3.0, 6.0):
        yield ["window_share", t * 100, 100.0, window_share(mpf(t * 100), 100)]
    for nm, b in ((405.0, 0.05), (780.0, 2.0), (810.0, 0.1), (810.0, 3.0), (1310.0, 0.4), (1550.0, 0.1), (1550.0, 0.8), (1550.0, 10.0), (1610.5, 20.0)):
        yield ["coherence_time_ps", nm, b, coherence_ps(mpf(nm), mpf(b))]
        yield ["pmd_sigma_per_ps", nm, b, sigma_per_ps(mpf(nm), mpf(b))]
    for nm in (1260.0, 1270.0, 1300.0, 1310.0, 1324.0, 1360.0, 1383.0, 1450.0, 1490.0, 1530.0, 1550.0, 1565.0, 1600.0, 1625.0):
        yield ["dispersion_g652_ps_per_nm_km", nm, "", dispersion_g652(mpf(nm))]
    for nm in (700.0, 750.0, 780.0, 800.0, 810.0, 850.0, 900.0, 950.0, 999.0, 1000.0):
        yield ["dispersion_silica_ps_per_nm_km", nm, "", dispersion_silica(nm)]


def main():
    check()
    write("slots.csv", "mu eta_a eta_b d_a d_b w e modes q qber accidental_q".split(), map(slot_line, rows.slots()))
    write("links.csv", LINK_FIELDS + LINK_RESULTS, ([x[k] for k in LINK_FIELDS] + link(x) for x in rows.links()))
    write("finite.csv", "m n k delta e_key f epsilon_total secret_bits xi nu".split(), map(finite_line, rows.finite()))
    write("timing.csv", ["quantity", "x", "y", "value"], timing_lines())


if __name__ == "__main__":
    main()
