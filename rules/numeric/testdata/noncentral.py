"""Reference values of noncentral t and the studentized range, by quadrature in
40-digit arithmetic of mpmath, small tails included.

    python3 noncentral.py > noncentral_small.tsv
"""
import mpmath
from mpmath import mp, mpf

mp.dps = 40


def upper(x):
    return mpmath.erfc(x / mpmath.sqrt(2)) / 2


def average(df, k, near):
    """Mean of k(S), S = sqrt(chi-squared/df), over pieces about near."""
    df = mpf(df)
    log_c = mpmath.log(2) + df / 2 * mpmath.log(df / 2) - mpmath.loggamma(df / 2)

    def f(s):
        return mpmath.exp(log_c + (df - 1) * mpmath.log(s) - df * s * s / 2) * k(s)

    width = 1 / mpmath.sqrt(df) / 2
    cuts = sorted({mpf(0)} | {c for i in range(-12, 13) for x in (1, near) if (c := x + i * width * min(x, 1)) > 0})
    return mpmath.quad(f, cuts + [mpf(60) if df < 4 else mpf(12)])


def t_upper(t, df, ncp):
    t, ncp = mpf(t), mpf(ncp)
    return average(df, lambda s: upper(t * s - ncp), max(ncp, 1) / t)


def range_upper(w, k):
    """One minus the distribution function of the range, from -12 to w + 12."""
    cuts = [mpf(v) for v in (-12, -4, 0)] + [w / 2, w, w + 4, w + 12]
    low = k * mpmath.quad(
        lambda z: mpmath.npdf(z) * (mpmath.ncdf(z) ** (k - 1) - (mpmath.ncdf(z) - mpmath.ncdf(z - w)) ** (k - 1)),
        sorted(cuts),
    )
    return low


def emit(name, args, value):
    print("\t".join([name] + [repr(float(a)) for a in args] + [mpmath.nstr(value, 20)]))


def main():
    print(f"# mpmath {mpmath.__version__}, {mp.dps} digits; noncentral.py")
    print("function\ta\tb\tc\tvalue")
    for df in [1.5, 8, 46, 400]:
        for ncp in [-6, 0, 2.8, 12, 60]:
            for t in [0.5, 2, 8, 30, 75]:
                emit("t_upper", [t, df, ncp], t_upper(t, df, ncp))
    for k in [2, 3, 6, 30]:
        for w in [0.2, 1, 3.3, 6, 15, 30]:
            emit("range_upper", [w, k, float("inf")], range_upper(mpf(w), k))


main()
