"""The longest secret key of one finite block."""
import math

from mpmath import mp, mpf


def h2(p):
    return mpf(0) if p in (0, 1) else -(p * mp.log(p, 2) + (1 - p) * mp.log(1 - p, 2))


def finite(n, k, delta, e_key, f, eps_total):
    """Best secret length (bits, not floored) of Lim et al., PRL 126, 100501 (2021), with its xi and nu.

    Minus infinity, and nan twice, where no xi and nu keep 2 eps_pe below eps_sec; where few do, the
    supremum can lie at the open end of the range, nu = 1/2 - delta.
    """
    m, half = n + k, mpf(eps_total) / 2  # eps_sec = eps_cor = half
    delta, e_key, f = mpf(delta), mpf(e_key), mpf(f)

    def log_pe(xi, nu, delta, lib):
        """ln eps_pe, without underflow."""
        g = 1 / (m * (delta + xi) + 1) + 1 / (m - m * (delta + xi) + 1)
        u, v = -2 * m * k * xi ** 2 / (n + 1), -2 * g * ((n * (nu - xi)) ** 2 - 1)
        return (max(u, v) + lib.log(1 + lib.exp(-abs(u - v)))) / 2

    def length(nu, lpe):
        eps_pa = half - 2 * mp.exp(lpe)
        if eps_pa <= 0:  # no key at all; the slope leads the search to a smaller eps_pe
            return mpf(10) ** 20 * -(100 + lpe)
        return n * (1 - h2(delta + nu)) - f * n * h2(e_key) - 2 * mp.log(1 / (2 * eps_pa), 2) - mp.log(2 / half, 2)

    def best_xi(nu):  # at a given nu the length rises as eps_pe falls
        return golden(lambda xi: -log_pe(xi, nu, delta, mp), mpf(0), nu)

    # A float grid over the whole of both ranges finds the hill, golden sections find its top.
    top, d = 0.5 - float(delta), float(delta)
    nus = [top * 10 ** (-6 * (1 - i / 240)) for i in range(240)] + [top]
    grid = [length(nu, min(log_pe(nu * j / 150, nu, d, math) for j in range(1, 150))) for nu in nus[:-1]]
    i = max(range(240), key=grid.__getitem__)
    if half <= 2 * mp.exp(log_pe(best_xi(mpf(top)), mpf(top), delta, mp)):  # eps_pe falls as nu grows
        return -mp.inf, mp.nan, mp.nan
    nu = golden(lambda v: length(v, log_pe(best_xi(v), v, delta, mp)), mpf(nus[max(i - 2, 0)]), mpf(nus[min(i + 2, 240)]))
    xi = best_xi(nu)
    best = length(nu, log_pe(xi, nu, delta, mp))
    assert best >= max(grid) and nu > 2 * nus[0]
    return best, xi, nu


def golden(fn, lo, hi, steps=75):
    """Where fn is greatest between lo and hi, to 2e-16 of the range, by golden section."""
    r = (mp.sqrt(5) - 1) / 2
    x, y = hi - r * (hi - lo), lo + r * (hi - lo)
    fx, fy = fn(x), fn(y)
    for _ in range(steps):
        if fx < fy:
            lo, x, fx, y = x, y, fy, x + r * (hi - x)
            y = lo + r * (hi - lo)
            fy = fn(y)
        else:
            hi, y, fy = y, x, fx
            x = hi - r * (hi - lo)
            fx = fn(x)
    return (lo + hi) / 2
