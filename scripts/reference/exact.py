"""What R itself rounds: exact rational arithmetic on the doubles, and 60-digit special functions by mpmath."""
import json
import platform
import sys
from fractions import Fraction

import mpmath
from mpmath import mp, mpf

mp.dps = 60


def lattice_uniform(n, multiplier):
    return [((i * multiplier) % 10007 + 0.5) / 10007 for i in range(1, n + 1)]


def bell(n):
    columns = [lattice_uniform(n, m) for m in (3571, 4241, 2609, 5003, 1999, 6151)]
    total = list(columns[0])
    for column in columns[1:]:
        total = [a + b for a, b in zip(total, column)]
    return total


def to_mpf(fraction):
    return mpf(fraction.numerator) / mpf(fraction.denominator)


def mean(values):
    return sum(values) / len(values)


def moments(doubles):
    """Mean, variance, G1 and G2 of the doubles as they are."""
    x = [Fraction(value) for value in doubles]
    n = len(x)
    centre = mean(x)
    m2, m3, m4 = (mean([(value - centre) ** power for value in x]) for power in (2, 3, 4))
    g1 = to_mpf(m3) / mp.sqrt(to_mpf(m2)) ** 3
    g2 = to_mpf(m4 / m2 ** 2 - 3)
    return {
        "mean": float(to_mpf(centre)),
        "variance": float(to_mpf(m2 * n / (n - 1))),
        "skewness": float(g1 * mp.sqrt(n * (n - 1)) / (n - 2)),
        "excessKurtosis": float(mpf(n - 1) / ((n - 2) * (n - 3)) * ((n + 1) * g2 + 6)),
    }


def brown_forsythe(groups):
    """F ratio as a fraction, and the upper tail at it."""
    deviations = []
    for group in groups:
        x = sorted(Fraction(value) for value in group)
        centre = (x[(len(x) - 1) // 2] + x[len(x) // 2]) / 2
        deviations.append([abs(value - centre) for value in x])
    everything = [z for group in deviations for z in group]
    k, n, grand = len(groups), len(everything), mean(everything)
    between = sum(len(group) * (mean(group) - grand) ** 2 for group in deviations)
    within = sum((z - mean(group)) ** 2 for group in deviations for z in group)
    f = to_mpf((between / (k - 1)) / (within / (n - k)))
    return {"f": float(f), "p": float(f_sf(f, k - 1, n - k))}


def f_sf(x, df1, df2):
    x, df1, df2 = mpf(x), mpf(df1), mpf(df2)
    return mp.betainc(df2 / 2, df1 / 2, 0, df2 / (df2 + df1 * x), regularized=True)


def f_upper_point(q, df1, df2):
    """Root of the upper tail in ln x by bisection, which needs no derivative and cannot leave the domain."""
    low, high = mpf(-60), mpf(60)
    while high - low > mpf(10) ** -25:
        middle = (low + high) / 2
        if f_sf(mp.exp(middle), df1, df2) > q:
            low = middle
        else:
            high = middle
    return mp.exp((low + high) / 2)


def anderson_darling(doubles):
    x = sorted(mpf(value) for value in doubles)
    n = len(x)
    centre = mp.fsum(x) / n
    deviation = mp.sqrt(mp.fsum((value - centre) ** 2 for value in x) / (n - 1))
    z = [(value - centre) / deviation for value in x]
    total = mp.fsum((2 * i + 1) * (mp.log(mp.ncdf(z[i])) + mp.log(mp.ncdf(-z[n - 1 - i]))) for i in range(n))
    return float(-n - total / n)


def polynomial(coefficients, x):
    return sum(mpf(c) * x ** power for power, c in enumerate(coefficients))


def shapiro_wilk(doubles):
    """W with the weights of AS R94 (Royston 1995), n > 5."""
    x = sorted(mpf(value) for value in doubles)
    n = len(x)
    m = [normal_quantile((mpf(i) - mpf(3) / 8) / (n + mpf(1) / 4)) for i in range(1, n + 1)]
    squares = mp.fsum(value ** 2 for value in m)
    root = 1 / mp.sqrt(n)
    last = m[-1] / mp.sqrt(squares) + polynomial(["0", ".221157", "-.147981", "-2.07119", "4.434685", "-2.706056"], root)
    second = m[-2] / mp.sqrt(squares) + polynomial(["0", ".042981", "-.293762", "-1.752461", "5.682633", "-3.582633"], root)
    divisor = mp.sqrt((squares - 2 * m[-1] ** 2 - 2 * m[-2] ** 2) / (1 - 2 * last ** 2 - 2 * second ** 2))
    weights = [-last, -second] + [value / divisor for value in m[2:-2]] + [second, last]
    centre = mp.fsum(x) / n
    numerator = mp.fsum(a * value for a, value in zip(weights, x)) ** 2
    return float(numerator / mp.fsum((value - centre) ** 2 for value in x))


def normal_quantile(p):
    return -mp.sqrt(2) * mp.erfinv(1 - 2 * p)


def far_normal_quantile(p):
    """Root of the logarithm of the lower tail, for which p may be as small as a double can be."""
    target = mp.log(mpf(p))
    return mp.findroot(lambda z: mp.log(mp.erfc(-z / mp.sqrt(2)) / 2) - target, -mp.sqrt(-2 * target) + 1)


def normal_log_cdf(z):
    return mp.log1p(-mp.ncdf(-mpf(z))) if z > 0 else mp.log(mp.ncdf(mpf(z)))


MASK = 2 ** 64 - 1


def split_mix_64(seed, count):
    """S. Vigna's splitmix64.c."""
    numbers = []
    for _ in range(count):
        seed = (seed + 0x9E3779B97F4A7C15) & MASK
        z = ((seed ^ (seed >> 30)) * 0xBF58476D1CE4E5B9) & MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & MASK
        numbers.append(z ^ (z >> 31))
    return numbers


def rotate(x, k):
    return ((x << k) | (x >> (64 - k))) & MASK


def uniforms(seed, count):
    """xoshiro256** 1.0 (Blackman & Vigna) seeded through SplitMix64; the upper 53 bits over 2^53."""
    s = split_mix_64(seed, 4)
    numbers = []
    for _ in range(count):
        numbers.append(((rotate(s[1] * 5 & MASK, 7) * 9 & MASK) >> 11) / 2 ** 53)
        t = s[1] << 17 & MASK
        s[2] ^= s[0]
        s[3] ^= s[1]
        s[1] ^= s[2]
        s[0] ^= s[3]
        s[2] ^= t
        s[3] = rotate(s[3], 45)
    return numbers


def stream(seed):
    u = uniforms(seed, 12)
    return {"seed": seed, "uniform": u, "normal": [float(normal_quantile(mpf(v))) for v in u], "exponential": [float(-mp.log(mpf(v))) for v in u]}


OFFSET = [1e9 + value / 1000 for value in bell(40)]
OFFSET_GROUPS = [[1e9 + value / 1000 for value in bell(9)], [1e9 + value / 300 for value in bell(14)], [1e9 + value / 500 for value in bell(6)]]
TAILS = [(x, df1, df2) for df1, df2 in ((1, 8), (2, 27), (9, 90), (59, 6), (499, 498)) for x in (0.01, 0.9, 1.5, 4.8, 60, 1e4)]
POINTS = [(q, df1, df2) for df1, df2 in ((1, 8), (9, 9), (59, 6), (6, 59), (299, 1), (1, 299), (999, 999)) for q in (0.025, 0.05, 1e-12)]
LOG_CDF = [-300, -70, -40, -20.001, -20, -19.999, -10, -1, -1e-9, 0, 1e-9, 2, 9, 20]
HEAVY = [(2 * u - 1) / (1.01 - (2 * u - 1) * (2 * u - 1)) for u in lattice_uniform(300, 2609)]

content = {
    "generator": "scripts/reference/exact.py",
    "versions": {"Python": platform.python_version(), "mpmath": mpmath.__version__},
    "offset": {"values": OFFSET, **moments(OFFSET), "w": shapiro_wilk(OFFSET), "a": anderson_darling(OFFSET)},
    "offsetGroups": {"groups": OFFSET_GROUPS, **brown_forsythe(OFFSET_GROUPS)},
    "fTails": [{"x": x, "df1": a, "df2": b, "sf": float(f_sf(x, a, b))} for x, a, b in TAILS],
    "fUpperPoints": [{"q": q, "df1": a, "df2": b, "x": float(f_upper_point(q, a, b))} for q, a, b in POINTS],
    "fQuantiles": [{"p": p, "df1": a, "df2": b, "x": float(f_upper_point(1 - mpf(p), a, b))} for p, a, b in ((0.001, 1, 299), (0.975, 2, 100000), (0.2, 59, 6))],
    "normalLogCdf": [{"z": z, "value": float(normal_log_cdf(z))} for z in LOG_CDF],
    "normalQuantiles": [{"p": p, "z": float(far_normal_quantile(p))} for p in (1e-300, 1e-100, 1e-20, 1e-6, 0.025, 0.3)],
    "andersonDarling": [{"shape": "heavy", "n": 300, "a": anderson_darling(HEAVY)}, {"shape": "bell", "n": 500, "a": anderson_darling(bell(500))}],
    "random": [stream(seed) for seed in (0, 1, 20261201, 2 ** 53 - 1)],
    "shapiroWilkThree": [
        # Exact for n = 3, Shapiro & Wilk (1965): W = (x3 - x1)^2 / (2 SS), p = (6/pi)(asin sqrt W - asin sqrt(3/4)).
        {"values": values, **(lambda w: {"w": float(w), "p": float(6 / mp.pi * (mp.asin(mp.sqrt(w)) - mp.asin(mp.sqrt(mpf(3) / 4))))})(
            to_mpf((Fraction(values[2]) - Fraction(values[0])) ** 2 / (2 * sum((Fraction(v) - mean([Fraction(u) for u in values])) ** 2 for v in values))))}
        for values in ([1.0, 2.0, 9.0], [1.0, 1.001, 9.0], [0.0, 1e-6, 1.0], [3.0, 4.25, 5.0])
    ],
}

with open(sys.argv[1], "w", encoding="utf-8") as target:
    json.dump(content, target, indent=2)
    target.write("\n")
