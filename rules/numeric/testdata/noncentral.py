"""Reference values of noncentral t and the studentized range, by quadrature in
mpmath's arithmetic of 40 digits and more, small tails included, and of the studentized range by scipy.

    python3 noncentral.py > noncentral_small.tsv
"""
import mpmath
import scipy.stats
from mpmath import mp, mpf

mp.dps = 40


def upper(x):
    return mpmath.erfc(x / mpmath.sqrt(2)) / 2


def over_the_line(log_f):
    """Integral of exp(log_f), unimodal, over pieces about its peak."""
    low, high = mpf(-60), mpf(60)
    for _ in range(120):
        a, b = low + (high - low) / 3, high - (high - low) / 3
        low, high = (a, high) if log_f(a) < log_f(b) else (low, b)
    peak = (low + high) / 2
    top = log_f(peak)
    cuts = [peak]
    for side in (-1, 1):
        # Pieces over which the logarithm falls by about 8, down to -100.
        x = peak
        for drop in range(8, 104, 8):
            step = mpf(1)
            while log_f(x + side * step) > top - drop:
                step *= 2
            lo, hi = mpf(0), step
            for _ in range(30):
                mid = (lo + hi) / 2
                lo, hi = (mid, hi) if log_f(x + side * mid) > top - drop else (lo, mid)
            x += side * hi
            cuts.append(x)
    return mpmath.exp(top) * mpmath.quad(lambda u: mpmath.exp(log_f(u) - top), sorted(cuts))


def t_upper(t, df, ncp):
    """Over u = ln S, S = sqrt(chi-squared/df)."""
    t, df, ncp = mpf(t), mpf(df), mpf(ncp)
    c = mpmath.log(2) + df / 2 * mpmath.log(df / 2) - mpmath.loggamma(df / 2)
    return over_the_line(lambda u: c + df * u - df * mpmath.exp(2 * u) / 2 + mpmath.log(upper(t * mpmath.exp(u) - ncp)))


def range_upper(w, k):
    def log_f(z):
        c = upper(-z)
        return mpmath.log(mpmath.npdf(z)) + mpmath.log(c ** (k - 1) - (c - upper(w - z)) ** (k - 1))

    return k * over_the_line(log_f)


def emit(name, args, value):
    print("\t".join([name] + [repr(float(a)) for a in args] + [mpmath.nstr(value, 20)]))


def main():
    print(f"# mpmath {mpmath.__version__}, scipy {scipy.__version__}; noncentral.py")
    print("function\ta\tb\tc\tvalue")
    for df in [1.5, 8, 46, 400]:
        for ncp in [-6, 0, 2.8, 12, 60]:
            for t in [0.5, 2, 8, 30, 75]:
                emit("t_upper", [t, df, ncp], t_upper(t, df, ncp))
    for k in [2, 3, 6, 30]:
        for w in [0.2, 3.3, 8, 14]:
            mp.dps = int(30 + w * w / 8)  # The difference of powers loses that many.
            emit("range_upper", [w, k, float("inf")], range_upper(mpf(w), k))
    for k in [2, 3, 5, 12, 25]:
        for df in [1, 2, 3.5, 10, 36, 500]:
            for q in [0.5, 3.4, 6, 20]:
                emit("studentized_range", [q, k, df], mpf(float(scipy.stats.studentized_range.sf(q, k, df))))


main()
