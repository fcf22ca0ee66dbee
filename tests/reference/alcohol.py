"""Alcoholic strength and density of ethanol-water by the general formula of OIML R 22 (1975)."""

A = [
    9.982012300e2, -1.929769495e2, 3.891238958e2, -1.668103923e3, 1.352215441e4, -8.829278388e4,
    3.062874042e5, -6.138381234e5, 7.470172998e5, -5.478461354e5, 2.234460334e5, -3.903285426e4,
]
B = [-2.0618513e-1, -5.2682542e-3, 3.6130013e-5, -3.8957702e-7, 7.1693540e-9, -9.9739231e-11]
C = [
    [1.693443461530087e-1, -1.046914743455169e1, 7.196353469546523e1, -7.047478054272792e2, 3.924090430035045e3,
     -1.210164659068747e4, 2.248646550400788e4, -2.605562982188164e4, 1.852373922069467e4, -7.420201433430137e3,
     1.285617841998974e3],
    [-1.193013005057010e-2, 2.517399633803461e-1, -2.170575700536993, 1.353034988843029e1, -5.029988758547014e1,
     1.096355666577570e2, -1.422753946421155e2, 1.080435942856230e2, -4.414153236817392e1, 7.442971530188783],
    [-6.802995733503803e-4, 1.876837790289664e-2, -2.002561813734156e-1, 1.022992966719220, -2.895696483903638,
     4.810060584300675, -4.672147440794683, 2.458043105903461, -5.411227621436812e-1],
    [4.075376675622027e-6, -8.763058573471110e-6, 6.515031360099368e-6, -1.515784836987210e-6],
    [-2.788074354782409e-8, 1.345612883493354e-8],
]


def density(p, t):
    """kg/m3 of a mixture of ethanol mass fraction p at t degC (-20 to 40)."""
    d = t - 20.0
    rho = sum(a * p**k for k, a in enumerate(A))
    rho += sum(b * d ** (k + 1) for k, b in enumerate(B))
    for i, row in enumerate(C):
        rho += sum(c * p ** (k + 1) for k, c in enumerate(row)) * d ** (i + 1)
    return rho


PURE_20 = density(1.0, 20.0)


def volume_fraction(p):
    """Strength by volume at 20 degC of ethanol mass fraction p."""
    return p * density(p, 20.0) / PURE_20


def mass_fraction(q):
    """Ethanol mass fraction of a strength q by volume at 20 degC: bisection, then nothing finer is needed."""
    if q >= 1.0:
        return 1.0
    low, high = 0.0, 1.0
    while True:
        mid = 0.5 * (low + high)
        if mid in (low, high):
            return mid
        if volume_fraction(mid) < q:
            low = mid
        else:
            high = mid
