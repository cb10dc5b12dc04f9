"""Reference values of distributions to 25 digits, by power series with positive
terms in mpmath's arithmetic, with so many digits that 1 - p keeps 40.

    python3 distributions.py > distributions.tsv
"""
import functools
import math

import mpmath
from mpmath import mp, mpf



def emit(name, args, value):
    if value is None:
        return
    cells = [name] + [repr(float(a)) for a in args] + ["0"] * (3 - len(args))
    print("\t".join(cells + [mpmath.nstr(value, 25)]))


def with_digits(log_p, compute):
    """Computes with 50 digits beyond those that 1 - p loses; None below 1e-305."""
    if log_p < -700:
        return None
    mp.dps = int(50 - log_p / 2.3)
    return compute()


@functools.lru_cache(maxsize=None)
def log_gamma(a, dps):
    return mpmath.loggamma(a)


def positive_series(ratio):
    total = term = mpf(1)
    n = 0
    while term > total * mpf(10) ** -mp.dps:
        term *= ratio(n)
        total += term
        n += 1
    return total


def beta_series(a, b, x, y):
    """DLMF 8.17.8; its terms fall like x^n."""
    log = a * mpmath.log(x) + b * mpmath.log(y) - mpmath.log(a)
    log += log_gamma(a + b, mp.dps) - log_gamma(a, mp.dps) - log_gamma(b, mp.dps)
    return mpmath.exp(log) * positive_series(lambda n: (a + b + n) / (a + 1 + n) * x)


def beta_lower(a, b, x):
    if x < 0.5:
        return beta_series(a, b, x, 1 - x)
    return 1 - beta_series(b, a, 1 - x, x)


def student_two_sided(t, df):
    bound = -df / 2 * math.log1p(t * t / df)

    def compute():
        d, u = mpf(df), mpf(t)
        return beta_lower(d / 2, mpf(1) / 2, d / (d + u * u))

    return with_digits(bound, compute)


def f_upper(f, d1, d2):
    # Chernoff bound about the mean.
    x = d1 * f / (d1 * f + d2)
    bound = 0.0
    if x > d1 / (d1 + d2):
        bound = d1 / 2 * math.log(x * (d1 + d2) / d1) + d2 / 2 * math.log((d1 + d2) / (d2 + d1 * f))

    def compute():
        a, b, v = mpf(d1), mpf(d2), mpf(f)
        return beta_lower(b / 2, a / 2, b / (b + a * v))

    return with_digits(bound, compute)


def chi_upper(x, df):
    """DLMF 8.11.4."""
    bound = df / 2 * math.log(x / df) - x / 2 + df / 2 if x > df else 0.0

    def compute():
        a, v = mpf(df) / 2, mpf(x) / 2
        log = a * mpmath.log(v) - v - log_gamma(a + 1, mp.dps)
        return 1 - mpmath.exp(log) * positive_series(lambda n: v / (a + 1 + n))

    return with_digits(bound, compute)


def main():
    print(f"# mpmath {mpmath.__version__}; distributions.py")
    print("function\ta\tb\tc\tvalue")
    for df in [0.5, 1, 2, 3, 4.7, 10, 46, 199, 200, 201, 1000.5, 5e4, 1e6]:
        for t in [1e-8, 0.1, 0.7, 1, 1.7, 1.96, 2.5, 5, 12, 37, 150, 1e4, 1e12]:
            emit("student_two_sided", [t, df], student_two_sided(t, df))
    for d1 in [0.7, 1, 2, 3, 7, 40, 999]:
        for d2 in [1, 2, 5.5, 16, 46, 300, 20000]:
            for f in [1e-6, 0.2, 0.9, 1, 1.3, 3, 20, 500, 1e7]:
                emit("f_upper", [f, d1, d2], f_upper(f, d1, d2))
    for df in [0.5, 1, 2, 3, 7.3, 30, 1000, 1e5]:
        for x in [1e-9, 0.01, 0.8, 1, 3.84, 12, 70, 990, 1400, 99000, 101000]:
            emit("chi_squared_upper", [x, df], chi_upper(x, df))
    mp.dps = 60
    for x in [-38, -20, -8, -3, -1, -1e-9, 0, 0.3, 1.5, 4, 9, 25, 37.5]:
        emit("normal_upper", [x], mpmath.erfc(mpf(x) / mpmath.sqrt(2)) / 2)
    for x in [-5, 0, 1, 20, 29.9, 30, 35, 40, 1000]:
        emit("normal_log_upper", [x], mpmath.log(mpmath.erfc(mpf(x) / mpmath.sqrt(2)) / 2))


main()
