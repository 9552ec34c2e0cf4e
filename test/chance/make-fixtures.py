"""Reference values for test/chance, to 25 digits, by methods unlike those of compiler/chance.

Run from this folder: python3 make-fixtures.py (Python 3.11, mpmath 1.3). It writes the *.json beside it, about
three minutes; then `npm run format` lays them out.
Chances of zones: each tail by mpmath's functions or by plain sums at 60 digits, differences taken on the smaller side.
Counts: sums of mass functions (exact rationals for the binomial). Noncentral chi-square: the Poisson mixture summed from
its first term. d2 and d3: order statistics, by other integrals than the ones under test.
"""
import json
from fractions import Fraction

import mpmath as mp

mp.mp.dps = 60


def number(text):
    value = Fraction(text)
    return mp.mpf(value.numerator) / value.denominator


def digits(x):
    return mp.nstr(x, 25, min_fixed=0, max_fixed=0)


# Continuous laws: a function from a cut to (below, above), each with full relative accuracy.


def normal(mean, sd):
    def tails(x):
        z = (x - mean) / sd
        return mp.erfc(-z / mp.sqrt(2)) / 2, mp.erfc(z / mp.sqrt(2)) / 2

    return tails


def student(df, location, scale):
    def outside(t):
        # P(|T| > t) by the hypergeometric series in nu/(nu + t^2), all terms positive.
        x = df / (df + t * t)
        a, b = df / 2, mp.mpf(1) / 2
        if x > mp.mpf("0.9999"):
            return 1 - mp.betainc(b, a, 0, 1 - x, regularized=True)
        return x**a * (1 - x) ** b / (a * mp.beta(a, b)) * mp.hyp2f1(a + b, 1, a + 1, x)

    def tails(x):
        t = (x - location) / scale
        tail = outside(abs(t)) / 2 if t != 0 else mp.mpf(1) / 2
        return (1 - tail, tail) if t >= 0 else (tail, 1 - tail)

    return tails


def laplace(location, scale):
    def tails(x):
        z = (x - location) / scale
        tail = mp.exp(-abs(z)) / 2
        return (1 - tail, tail) if z >= 0 else (tail, 1 - tail)

    return tails


def logistic(location, scale):
    def tails(x):
        z = (x - location) / scale
        return 1 / (1 + mp.exp(-z)), 1 / (1 + mp.exp(z))

    return tails


def lognormal(log_mean, log_sd):
    def tails(x):
        return normal(log_mean, log_sd)(mp.log(x)) if x > 0 else (mp.mpf(0), mp.mpf(1))

    return tails


def gamma(shape, scale):
    def tails(x):
        if x <= 0:
            return mp.mpf(0), mp.mpf(1)
        y = x / scale
        lower = mp.exp(shape * mp.log(y) - y - mp.loggamma(shape + 1)) * mp.hyp1f1(1, shape + 1, y)
        with mp.workdps(400):
            upper = mp.gammainc(shape, y, regularized=True)
        return lower, +upper

    return tails


def weibull(shape, scale):
    def tails(x):
        if x <= 0:
            return mp.mpf(0), mp.mpf(1)
        t = (x / scale) ** shape
        return -mp.expm1(-t), mp.exp(-t)

    return tails


def uniform(low, high):
    def tails(x):
        inside = min(max((x - low) / (high - low), mp.mpf(0)), mp.mpf(1))
        return inside, 1 - inside

    return tails


def chi_square(df, noncentrality):
    if noncentrality == 0:
        return gamma(df / 2, mp.mpf(2))

    def tails(x):
        if x <= 0:
            return mp.mpf(0), mp.mpf(1)
        with mp.workdps(380):
            # Poisson mixture from j = 0; gamma tails by their recurrence at 380 digits, so that cancelling is harmless.
            y, rate = x / 2, noncentrality / 2
            weight, shape = mp.exp(-rate), df / 2
            upper = mp.gammainc(shape, y, regularized=True)
            step = mp.exp(shape * mp.log(y) - y - mp.loggamma(shape + 1))
            above = below = mp.mpf(0)
            for j in range(20000):
                above += weight * upper
                below += weight * (1 - upper)
                upper += step
                shape += 1
                step *= y / shape
                weight *= rate / (j + 1)
                if j > rate + y and weight < mp.mpf(10) ** -370:
                    break
        return +below, +above

    return tails


CONTINUOUS = {
    "normal": normal,
    "student": student,
    "laplace": laplace,
    "logistic": logistic,
    "lognormal": lognormal,
    "exponential": lambda mean: weibull(mp.mpf(1), mean),
    "gamma": gamma,
    "weibull": weibull,
    "uniform": uniform,
    "chi_square": chi_square,
}


def between(a, b):
    """The chance between two cuts from their (below, above)."""
    if b[0] <= mp.mpf(1) / 2:
        return b[0] - a[0]
    if a[1] <= mp.mpf(1) / 2:
        return a[1] - b[1]
    return 1 - a[0] - b[1]


def continuous_case(family, parameters, cuts):
    law = CONTINUOUS[family](*[number(p) for p in parameters])
    bounds = [law(number(c)) for c in cuts]
    zones = [bounds[0][0]] + [between(a, b) for a, b in zip(bounds, bounds[1:])] + [bounds[-1][1]]
    return {
        "family": family,
        "parameters": parameters,
        "cuts": [[c, "below"] for c in cuts],
        "chances": [digits(p) for p in zones],
    }


# Counts: a function from (k, l) to P(k <= X <= l), l None for no end.


def poisson(mean):
    def mass(k):
        return mp.exp(k * mp.log(mean) - mean - mp.loggamma(k + 1))

    return mass, None


def binomial(n, p):
    def mass(k):
        from math import comb

        exact = Fraction(comb(int(n), k)) * p**k * (1 - p) ** (int(n) - k)
        return mp.mpf(exact.numerator) / exact.denominator

    return mass, int(n)


def negative_binomial(r, p):
    def mass(k):
        return mp.exp(mp.loggamma(k + r) - mp.loggamma(k + 1) - mp.loggamma(r) + r * mp.log(p) + k * mp.log(1 - p))

    return mass, None


COUNTS = {
    "poisson": poisson,
    "binomial": binomial,
    "negative_binomial": negative_binomial,
    "geometric": lambda p: negative_binomial(mp.mpf(1), p),
}


def total(mass, last, k, l):
    """The sum of the mass from k to l; without an end, until terms fall and no longer count."""
    if l is None:
        l = last
    result, previous = mp.mpf(0), mp.mpf(0)
    while l is None or k <= l:
        term = mass(k)
        result += term
        if l is None and term < previous and term < result * mp.mpf(10) ** -45:
            break
        previous = term
        k += 1
    return result


def count_case(family, parameters, cuts):
    numbers = [Fraction(p) for p in parameters]
    if family != "binomial":
        numbers = [number(p) for p in parameters]
    mass, last = COUNTS[family](*numbers)
    # The largest count below the cut, the cut itself when the lower letter owns it.
    ends = []
    for cut, owner in cuts:
        c = Fraction(cut)
        floor = c.numerator // c.denominator
        ends.append(floor - 1 if owner == "above" and c.denominator == 1 else floor)
    zones = [total(mass, last, 0, ends[0])] if ends[0] >= 0 else [mp.mpf(0)]
    zones += [total(mass, last, max(a + 1, 0), b) if b > a else mp.mpf(0) for a, b in zip(ends, ends[1:])]
    zones += [total(mass, last, max(ends[-1] + 1, 0), None)]
    return {"family": family, "parameters": parameters, "cuts": cuts, "chances": [digits(p) for p in zones]}


def zones():
    c, k = continuous_case, count_case
    sigmas = [str(i) for i in range(-3, 4)]
    cases = [
        c("normal", ["0", "1"], sigmas),
        c("normal", ["0", "1"], ["-37", "-30", "-20", "-12", "-8", "-6", "-5", "5", "6", "8", "12", "20", "30", "37"]),
        c("normal", ["0", "1"], ["-8.000001", "-8", "-0.0001", "0.0002", "0.3", "0.300001", "8", "8.000001", "30", "30.0000001"]),
        c("normal", ["331.2", "0.63"], ["328.1", "329.7", "330.55", "331.2", "331.21", "333", "336.3", "341", "354.4"]),
        c("normal", ["1/3", "1/7"], ["-5", "-4.9", "0", "1", "5", "5.5"]),
        c("student", ["5"] + ["0", "1"], sigmas + ["8", "8.001", "100", "1000000"]),
        c("student", ["7.5", "1", "2"], ["-400", "-17", "-16.99", "0", "1", "1.0001", "3", "17", "80"]),
        c("student", ["1", "0", "1"], ["-1000000000", "-2", "0", "1", "1000000", "1000000000000"]),
        c("student", ["0.3", "0", "1"], ["-1000000000000", "-5", "1", "2", "1000000", "2000000"]),
        c("student", ["30", "0", "1"], ["-40", "-8", "0.5", "0.6", "8", "8.0001", "20", "1000"]),
        c("student", ["1000", "0", "1"], ["-12", "-8", "-3", "-1.2", "-1.1", "0", "3", "8", "8.001", "30"]),
        c("student", ["200000.5", "0", "1"], ["-8", "-3", "0", "0.001", "3", "8", "30"]),
        c("student", ["0.04", "0", "1"], ["-60", "-0.001", "25", "25.5", "30"]),
        c("student", ["0.1575", "0", "1"], ["-0.3", "1.1", "900", "1000"]),
        c("laplace", ["1", "2"], ["-1200", "-20", "0.9", "1.00001", "3", "3.0001", "40", "1300"]),
        c("logistic", ["1", "0.5"], ["-300", "-20", "0.9", "1.00001", "3", "3.0001", "40", "340"]),
        c("lognormal", ["0.5", "0.25"], ["-1", "0", "0.01", "0.5", "1", "1.648", "1.649", "3", "10", "100", "1000"]),
        c("exponential", ["3"], ["0", "0.000000000001", "0.00001", "1", "1.0000001", "9", "60", "60.001", "2000"]),
        c("gamma", ["2.5", "1.5"], ["-1", "0.000000001", "0.01", "1", "3.75", "3.751", "10", "40", "40.01", "1000"]),
        c("gamma", ["0.01", "1"], ["0.0000000001", "0.0000001", "0.001", "0.5", "0.9", "1.1", "5", "600"]),
        c("gamma", ["0.3", "2"], ["0.0000001", "0.000000101", "0.001", "1", "1.9", "2.1", "30", "1200"]),
        c("gamma", ["100", "0.1"], ["2", "5", "5.001", "9.9", "10", "10.0001", "15", "20", "50"]),
        c("gamma", ["12345.67", "1"], ["11000", "12000", "12345", "12346", "13000", "14000"]),
        c("weibull", ["1.7", "2"], ["-1", "0.0000001", "0.5", "0.50001", "2", "10", "60", "60.0001", "90"]),
        c("weibull", ["0.2", "1"], ["0.0000001", "1", "1.0001", "1000000", "100000000000"]),
        c("uniform", ["2", "5"], ["1", "2", "2.0000001", "3.3", "4.999", "5", "7"]),
        c("chi_square", ["3", "0"], ["0.0001", "0.5", "2.3", "8", "8.0001", "50", "500", "1300"]),
        c("chi_square", ["1", "0"], ["0.0000001", "0.001", "1", "9", "64", "900", "1350"]),
        c("chi_square", ["3", "4"], ["0.0001", "0.5", "2.3", "7", "8", "8.0001", "50", "300", "1300"]),
        c("chi_square", ["1", "0.5"], ["0.0000001", "0.001", "1", "1.5", "9", "64", "900", "1350"]),
        c("chi_square", ["12", "200"], ["5", "20", "100", "205", "212", "220", "350", "352", "1000", "1800"]),
        c("chi_square", ["2.5", "1500"], ["500", "900", "1300", "1502", "1510", "1800", "2500", "4000"]),
        k("poisson", ["4"], [["1", "below"], ["4", "below"], ["9", "below"], ["10", "below"], ["30", "below"], ["60", "below"]]),
        k("poisson", ["4"], [["0", "above"], ["0.5", "above"], ["3", "above"], ["3", "below"], ["12.5", "below"], ["150", "above"]]),
        k("poisson", ["0.002"], [["0", "below"], ["1", "below"], ["3", "below"], ["20", "below"]]),
        k("poisson", ["312.7"], [["60", "below"], ["62", "below"], ["200", "below"], ["300", "below"], ["310", "below"], ["313", "above"], ["450", "above"], ["453", "above"], ["700", "below"]]),
        k("binomial", ["50", "1/20"], [["0", "below"], ["2", "below"], ["3", "above"], ["8", "below"], ["20", "below"], ["45", "below"]]),
        k("binomial", ["200", "0.02"], [["0", "below"], ["4", "below"], ["12", "below"], ["30", "below"], ["31", "below"], ["100", "below"], ["199", "below"]]),
        k("binomial", ["1000", "0.3"], [["100", "below"], ["150", "below"], ["151", "below"], ["290", "below"], ["300", "below"], ["310", "below"], ["450", "below"], ["452", "below"], ["600", "below"]]),
        k("negative_binomial", ["2.5", "0.1"], [["0", "below"], ["1", "below"], ["10", "below"], ["22", "below"], ["100", "below"], ["101", "below"], ["400", "below"]]),
        k("negative_binomial", ["0.1", "0.02"], [["0", "below"], ["1", "below"], ["5", "above"], ["10", "below"], ["100", "below"], ["800", "below"]]),
        k("negative_binomial", ["40", "0.5"], [["3", "below"], ["20", "below"], ["38", "below"], ["41", "below"], ["100", "below"], ["300", "below"]]),
        k("geometric", ["0.1"], [["0", "below"], ["5", "above"], ["6", "above"], ["50", "below"], ["200", "below"]]),
    ]
    return cases


# Control constants.


def upper(x):
    return mp.erfc(x / mp.sqrt(2)) / 2


def c4(n):
    n = mp.mpf(n)
    return mp.sqrt(2 / (n - 1)) * mp.gamma(n / 2) / mp.gamma((n - 1) / 2)


def d2(n):
    """The mean of the range as twice that of the largest: 2 n ∫ x φ(x) Φ(x)^(n−1) dx."""
    f = lambda x: x * mp.npdf(x) * upper(-x) ** (n - 1)
    return 2 * n * mp.quad(f, [-14, -6, -3, -1, 0, 1, 2, 3, 4, 6, 14])


def d3(n, step):
    """The second central moment of the range by its density n (n−1) ∫ φ(t−w/2) φ(t+w/2) (Φ(t+w/2) − Φ(t−w/2))^(n−2) dt.

    Trapezoidal rule in t and, with w = exp(s − exp(−s)), in s.
    """
    centre = d2(n)
    h = mp.mpf(1) / (10 if n < 100 else 25)
    total = mp.mpf(0)
    for i in range(int(-4.3 / step), int(3.2 / step)):
        s = i * step
        w = mp.exp(s - mp.exp(-s))
        weight = (w - centre) ** 2 * w * (1 + mp.exp(-s))
        inner = mp.mpf(0)
        for k in range(0, 300):
            low, high = k * h - w / 2, k * h + w / 2
            density = mp.npdf(low) * mp.npdf(high)
            if density < mp.mpf(10) ** -26:
                break
            inner += (density if k else density / 2) * (upper(low) - upper(high)) ** (n - 2)
        total += weight * 2 * inner
    return mp.sqrt(n * (n - 1) * h * step * total)


def control_constants():
    with mp.workdps(28):
        sizes = [2, 3, 4, 5, 6, 10, 25, 100, 1000, 10000]
        rows = {n: {"c4": digits(c4(n)), "d2": digits(d2(n))} for n in sizes}
        for n, step in [(2, 24), (3, 24), (5, 24), (10, 32), (25, 40), (1000, 72)]:
            rows[n]["d3"] = digits(d3(n, mp.mpf(1) / step))
    return rows


# Special functions.


def gamma_tails():
    """Rows [shape, x, lower tail, upper tail, density]."""
    rows = []
    shapes = ["0.001", "0.1", "0.5", "0.999", "1", "1.3", "2.1", "5", "20", "50.5", "1000"]
    for shape in shapes:
        a = number(shape)
        for factor in ["0.001", "0.1", "0.5", "0.9", "0.99", "1", "1.05", "1.3", "2", "5", "60", "600"]:
            x = str(Fraction(shape) * Fraction(factor))
            lower, upper = gamma(a, mp.mpf(1))(number(x))
            if min(lower, upper) < mp.mpf(10) ** -290:
                continue
            density = mp.exp((a - 1) * mp.log(number(x)) - number(x) - mp.loggamma(a))
            rows.append([shape, x] + [digits(v) for v in (lower, upper, density)])
    return rows


def beta_tails():
    """Rows [a, b, x, lower tail, upper tail], both by the hypergeometric series of positive terms."""

    def lower(a, b, x):
        return x**a * (1 - x) ** b / (a * mp.beta(a, b)) * mp.hyp2f1(a + b, 1, a + 1, x)

    rows = []
    sizes = ["0.001", "0.1", "0.5", "1", "1.5", "3.3", "10", "200"]
    for first in sizes:
        for second in sizes:
            a, b = number(first), number(second)
            mean = Fraction(first) / (Fraction(first) + Fraction(second))
            places = ["1/100000000000000000000", "1/1000", "0.3", "0.5", "0.9", "0.9999", "999999999/1000000000"]
            for x in places + [str(mean), str(mean * Fraction("0.95")), str(1 - (1 - mean) * Fraction("0.95"))]:
                rows.append([first, second, x] + [digits(v) for v in (lower(a, b, number(x)), lower(b, a, 1 - number(x)))])
    return rows


def log_gammas():
    """Rows [z, ln gamma(z)], to 40 digits."""
    places = ["1/10000000000", "0.1", "0.5", "1", "1.5", "2", "2.1", "10", "33.3", "100.5", "10000", "1000000.1"]
    return [[z, mp.nstr(mp.loggamma(number(z)), 40, min_fixed=0, max_fixed=0)] for z in places]


def write(name, value):
    with open(name, "w") as file:
        json.dump(value, file, indent=None, separators=(", ", ": "))
        file.write("\n")


if __name__ == "__main__":
    write("zones.json", zones())
    write(
        "special-functions.json",
        {"gamma": gamma_tails(), "beta": beta_tails(), "logGamma": log_gammas()},
    )
    write("control-constants.json", control_constants())
