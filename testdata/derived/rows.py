"""The inputs of the reference values: written out where a case matters, else drawn with a fixed seed."""
import random

INF = float("inf")

# Checked against photon-number sums: mu, eta_a, eta_b, d_a, d_b, w, e, modes.
BRUTE = [
    (0.1, 0.3, 0.2, 1e-4, 2e-4, 1.0, 0.03, INF),
    (0.1, 0.3, 0.2, 1e-4, 2e-4, 1.0, 0.03, 1.0),
    (0.4, 0.7, 0.25, 1e-3, 0.0, 0.76, 0.03, INF),
    (1.5, 0.9, 0.6, 0.01, 0.002, 0.4, 0.2, INF),
    (0.05, 0.5, 0.5, 0.0, 0.0, 0.9, 0.0, INF),
    (0.5, 0.4, 0.8, 1e-3, 1e-3, 1.0, 0.0, 1.0),
    (0.5, 0.6, 0.3, 2e-3, 1e-4, 1.0, 0.0, 1.2),
    (0.8, 1.0, 0.3, 0.0, 1e-3, 1.0, 0.0, 5.0),
    (0.8, 0.2, 0.9, 1e-3, 0.0, 1.0, 0.0, 50.0),
    (0.3, 0.5, 0.8, 1e-3, 3e-3, 1.0, 0.1, 1.0),
    (0.2, 0.9, 1.0, 0.0, 0.0, 1.0, 0.02, 1.0),
    (0.4, 0.3, 0.6, 2e-3, 0.0, 1.0, 0.05, 2.0),
    (0.5, 0.8, 0.7, 1e-4, 1e-3, 1.0, 0.5, 2.0),
]


def rounded(x, digits=3):
    return float(f"{x:.{digits}g}")


def log_uniform(r, low, high):
    return rounded(low * (high / low) ** r.random())


def slots():
    yield from BRUTE
    # Ends of the ranges: nothing emitted, a blind arm, no loss at all, 200 dB without and with noise.
    for modes in (INF, 1.0, 1.2):
        yield 0.0, 0.3, 0.2, 0.0, 0.0, 1.0, 0.01, modes
        yield 0.0, 0.3, 0.2, 1e-5, 1e-6, 1.0, 0.01, modes
        yield 0.1, 0.0, 0.2, 1e-5, 0.0, 1.0, 0.01, modes
        yield 2.0, 1.0, 1.0, 0.0, 0.0, 1.0, 0.0, modes
        yield 1e-9, 1e-20, 1e-20, 0.0, 0.0, 1.0, 1e-8, modes
        yield 1e-9, 1.0, 1.0, 0.0, 0.0, 1.0, 1e-8, modes
        yield 1e-9, 1e-20, 1.0, 0.0, 0.0, 1.0, 0.0, modes
        yield 0.1, 1e-20, 1e-20, 1e-7, 1e-12, 1.0, 0.02, modes
        yield 2.0, 1e-20, 0.5, 0.01, 0.0, 1.0, 0.5, modes
    r = random.Random(1)
    pick = r.choice
    for i in range(360):
        modes = pick((INF, INF, INF, 1.0, 1.2, 2.0, 5.0, 50.0))
        eta = [rounded(10 ** -(r.random() * pick((0.5, 2, 5, 20)))) for _ in "ab"]
        d = [pick((0.0, 0.01, log_uniform(r, 1e-12, 1e-2), log_uniform(r, 1e-9, 1e-4))) for _ in "ab"]
        w = pick((1.0, 0.1, rounded(0.1 + 0.9 * r.random()))) if modes == INF else 1.0
        e = pick((0.0, 1e-8, 0.001, 0.01, 0.03, 0.11, 0.25, 0.5))
        yield pick((log_uniform(r, 1e-9, 2), log_uniform(r, 1e-3, 2))), *eta, *d, w, e, modes


def both(**entries):
    return {side + k: v for k, v in entries.items() for side in ("a_", "b_")}


# A good link to start from: continuous, passive, small errors.
CALM = {"pulse_rate_hz": 0.0, "pair_rate_hz": 1e6, "modes": INF, "e1": 0.01, "e2": 0.02, "window_ps": 300.0, "key_share": 0.5,
        **both(transmittance=0.2, passive=1, misalignment_error=0.005, pmd_ps=0.1, wavelength_nm=1550.0, bandwidth_fwhm_nm=0.8,
               background_hz=0.0, unpaired_hz=0.0, efficiency=0.8, dark_counts_hz=100.0, jitter_fwhm_ps=50.0, dead_time_ns=50.0,
               afterpulsing=0.0, dispersion_ps=20.0),
        "clock_jitter_fwhm_ps": 30.0, "pump_pulse_fwhm_ps": 0.0, "f": 1.16}
PULSED = {"pulse_rate_hz": 1e8, "pair_rate_hz": 2e6, "pump_pulse_fwhm_ps": 10.0}
PERFECT = {"e1": 0.0, "e2": 0.0, **both(misalignment_error=0.0, pmd_ps=0.0, dark_counts_hz=0.0, dead_time_ns=0.0)}
CHOSEN = [
    {},
    {"b_passive": 0},
    {"key_share": 0.9, **both(passive=0)},
    {"key_share": 0.9},
    {"a_dispersion_ps": 400.0, "b_dispersion_ps": -400.0},  # spreads cancel
    {"a_dispersion_ps": 400.0, "b_dispersion_ps": 400.0},  # spreads add
    {"a_wavelength_nm": 810.0, "a_bandwidth_fwhm_nm": 0.05, "b_bandwidth_fwhm_nm": 0.183},  # coherence time rules
    {"pair_rate_hz": 1e8, **both(transmittance=0.9, dead_time_ns=10000.0, afterpulsing=0.1)},  # blind
    {"pair_rate_hz": 3e7, **both(transmittance=1.0, efficiency=1.0, dead_time_ns=0.0, afterpulsing=0.3)},
    {"b_dead_time_ns": 50000.0, "b_afterpulsing": 0.1, "b_dark_counts_hz": 1e5, "pair_rate_hz": 5e7},
    {**PERFECT},
    {**PERFECT, "pair_rate_hz": 50.0},  # QBER below 1e-6: hardly ever two pairs
    {**PERFECT, "pair_rate_hz": 50.0, "e1": 1e-9, "e2": 2e-8, **both(transmittance=1e-20)},
    {**PERFECT, "pair_rate_hz": 50.0, "e1": 1e-9, "e2": 2e-8, **both(transmittance=1e-10, passive=0)},
    {"b_transmittance": 1e-20},
    {**both(transmittance=1e-20)},
    {"pair_rate_hz": 0.0},
    {**PERFECT, "pair_rate_hz": 0.0},
    {**both(background_hz=2000.0, unpaired_hz=1e6)},
    {"e1": 0.08, "e2": 0.2},  # no key
    {"e1": 0.0, "e2": 0.1, "key_share": 0.5},  # key in one basis only or in both
    {**PULSED},
    {**PULSED, "modes": 1.0},
    {**PULSED, "modes": 1.2, "b_passive": 0, "key_share": 0.8},
    {**PULSED, **both(passive=0), "key_share": 0.7, "modes": 5.0},
    {**PULSED, **both(dead_time_ns=8.0, transmittance=0.9)},  # shorter than the period: nothing is lost
    {**PULSED, **both(dead_time_ns=10.0, transmittance=0.9)},  # one period exactly
    {**PULSED, **both(dead_time_ns=59.9, transmittance=0.9)},  # five periods
    {**PULSED, "pump_pulse_fwhm_ps": 0.0, "clock_jitter_fwhm_ps": 0.0, **both(jitter_fwhm_ps=0.0, dispersion_ps=0.0)},  # no spread
    {**PULSED, "a_dispersion_ps": 300.0, "b_dispersion_ps": -300.0},  # no cancelling against a clock
    {**PULSED, **PERFECT, "pair_rate_hz": 1.0},
    {**PULSED, **PERFECT, "pair_rate_hz": 1.0, "modes": 1.0, **both(transmittance=1e-20)},
    {**PULSED, "pair_rate_hz": 5e7, **both(transmittance=0.9, dead_time_ns=10000.0, afterpulsing=0.1)},
    {**PULSED, **both(background_hz=2000.0, unpaired_hz=1e6)},
    {**PULSED, "pair_rate_hz": 0.0},
]


def links():
    for change in CHOSEN:
        yield {**CALM, **change}
    r = random.Random(2)
    pick = r.choice
    for i in range(85):
        pulse_rate = pick((1e6, 2.5e7, 1e8, 7.6e7, 1e9)) if i % 2 else 0.0
        window = rounded(50 + 950 * r.random() ** 2)
        x = {"pulse_rate_hz": pulse_rate,
             "pair_rate_hz": rounded(pulse_rate * log_uniform(r, 1e-4, 0.3)) if pulse_rate else log_uniform(r, 1e4, 1e8),
             "modes": pick((INF, 1.0, 1.2, 2.0, 5.0, 50.0)) if pulse_rate else INF,
             "e1": pick((0.0, 1e-8, 0.003, 0.01, 0.03)), "e2": pick((0.03, 0.035, 0.05)), "window_ps": window,
             "key_share": pick((0.5, 0.5, 0.6, 0.75, 0.9, 0.95)),
             "clock_jitter_fwhm_ps": pick((0.0, 20.0, 100.0)), "pump_pulse_fwhm_ps": pick((0.0, 5.0, 150.0)) if pulse_rate else 0.0,
             "f": pick((1.0, 1.1, 1.16, 1.22))}
        noisy = pick((0, 0, 1))
        for side in "a_", "b_":
            nm = pick((810.0, 1310.0, 1550.0, 1550.0))
            arm = {"transmittance": rounded(10 ** -(r.random() * pick((1, 1.5, 3, 3, 20)))), "passive": pick((0, 1)),
                   "misalignment_error": pick((0.0, 0.005, 0.02)), "pmd_ps": pick((0.0, 0.05, rounded(r.random()))),
                   "wavelength_nm": nm, "bandwidth_fwhm_nm": log_uniform(r, 0.05, 5), "background_hz": pick((0.0, 50.0, 1e4 * noisy)),
                   "unpaired_hz": pick((0.0, 0.0, log_uniform(r, 1e3, 1e7))), "efficiency": pick((0.12, 0.2, 0.55, 0.85, 1.0)),
                   "dark_counts_hz": pick((0.0, 10.0, 300.0, 1e4 * noisy)), "jitter_fwhm_ps": pick((0.0, 30.0, 50.0, 180.0)),
                   "dead_time_ns": pick((0.0, 8.0, 30.0, 50.0, 1000.0, 20000.0)), "afterpulsing": pick((0.0, 0.005, 0.02, 0.1 * noisy)),
                   "dispersion_ps": pick((0.0, rounded(200 * r.random() - 100), rounded(20 * r.random() - 10)))}
            x.update({side + k: v for k, v in arm.items()})
        yield x


def finite():
    """n, k, delta, e_key, f, eps_total."""
    for k in (1692, 1550):  # Lim et al. 2021, on the data of Yin et al., Nature 582, 501 (2020)
        for eps in (1e-6, 1e-5, 1e-7):
            yield 3100 - k, k, 0.0451, 0.0451, 1.19, eps
    cases = ((0.5, 0.02, 0.02, 1.16, 1e-10), (0.7, 0.01, 0.03, 1.1, 1e-9), (0.9, 0.05, 0.01, 1.22, 1e-6), (0.3, 0.0, 0.0, 1.0, 1e-8),
             (0.95, 0.03, 0.025, 1.16, 1e-12))
    for m in (10 ** 3, 3 * 10 ** 3, 10 ** 4, 10 ** 5, 10 ** 6, 10 ** 8, 10 ** 10):
        for share, *rest in cases:
            n = round(m * share)
            yield n, m - n, *rest
