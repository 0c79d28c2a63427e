"""The same slot by brute force, in floats: sums over photon numbers, no generating function.

A click pattern is a number of the bits A0 = 1, A1 = 2, B0 = 4, B1 = 8.
"""
import math

def either(p, q):
    """Distribution of the pattern of clicks that two independent causes make together."""
    r = [0.0] * 16
    for i, x in enumerate(p):
        for j, y in enumerate(q):
            r[i | j] += x * y
    return r


NOTHING = [1.0] + [0.0] * 15


def scored(p, d_a, d_b):
    """Add noise, then gain and QBER: a double click is a random bit."""
    for bit, d in ((1, d_a), (2, d_a), (4, d_b), (8, d_b)):
        noise = [0.0] * 16
        noise[0], noise[bit] = math.exp(-d), 1 - math.exp(-d)
        p = either(p, noise)
    gain = wrong = 0.0
    for bits, x in enumerate(p):
        a, b = bits & 3, bits >> 2
        if a and b:
            gain += x
            wrong += x * (0.5 if 3 in (a, b) else float(a != b))
    return gain, wrong / gain


def by_pairs(mu, eta_a, eta_b, d_a, d_b, w, e, modes, most=40):
    """Sum over the numbers of pairs of each kind: Poisson, or negative binomial of `modes` modes at e = 0."""
    total = NOTHING
    for i in (0, 1):
        for j in (0, 1):
            mean = mu / 2 * ((1 - e) if i == j else e)
            one, both = [0.0] * 16, eta_a * eta_b * w
            one[(1 << i) | (4 << j)] = both
            one[1 << i], one[4 << j] = eta_a - both, eta_b - both
            one[0] = 1 - eta_a - eta_b + both
            kind, after_n = [0.0] * 16, NOTHING
            for n in range(most):
                if math.isinf(modes):
                    pn = math.exp(-mean) * mean ** n / math.factorial(n)
                else:
                    s = mean / modes
                    pn = math.gamma(n + modes) / (math.factorial(n) * math.gamma(modes)) * s ** n / (1 + s) ** (n + modes)
                kind = [x + pn * y for x, y in zip(kind, after_n)]
                after_n = either(after_n, one)
            total = either(total, kind)
    return scored(total, d_a, d_b)


def by_fock(mu, eta_a, eta_b, d_a, d_b, w, e, modes, most=15):
    """Sum over photon numbers with Bob's two modes turned, a whole number of Schmidt modes (w = 1)."""
    assert w == 1
    s, c, f = mu / (2 * modes), math.sqrt(1 - e), math.factorial
    mode = [0.0] * 16
    for n in range(most):
        for m in range(most):
            weight = (s / (1 + s)) ** (n + m) / (1 + s) ** 2
            for p in range(n + m + 1):  # |n, m> turned into |p, n + m - p>
                amp = sum(math.comb(n, k) * c ** k * math.sqrt(e) ** (n - k)
                          * math.comb(m, p - k) * (-math.sqrt(e)) ** (p - k) * c ** (m - p + k)
                          for k in range(max(0, p - m), min(n, p) + 1))
                pr = weight * amp ** 2 * f(p) * f(n + m - p) / (f(n) * f(m))
                miss = ((1 - eta_a) ** n, (1 - eta_a) ** m, (1 - eta_b) ** p, (1 - eta_b) ** (n + m - p))
                for bits in range(16):
                    mode[bits] += pr * math.prod(1 - x if bits >> i & 1 else x for i, x in enumerate(miss))
    total = NOTHING
    for _ in range(int(modes)):
        total = either(total, mode)
    return scored(total, d_a, d_b)
