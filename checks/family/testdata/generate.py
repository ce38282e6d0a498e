"""Writes the truth tables beside it: log distribution and survival functions
with 60-digit arithmetic (mpmath); 25 digits are kept. Seed 1."""
import pathlib, random
from mpmath import mp, mpf, gammainc, betainc, log
mp.dps = 60
random.seed(1)
here = pathlib.Path(__file__).parent
show = lambda v: mp.nstr(v, 25)
with open(here / "gamma.csv", "w") as f:
    f.write("# generate.py, mpmath, 60 digits\na,x,log_lower,log_upper\n")
    for a in [1e-6, 1e-3, 0.1, 0.5, 1.0, 10.5, 200.0, 1e4]:
        for k in range(8):
            x = a * 10 ** random.uniform(-3, 1) if k < 5 else a * random.uniform(0.9, 1.1)
            lo = gammainc(mpf(a), 0, mpf(x), regularized=True)
            up = gammainc(mpf(a), mpf(x), mp.inf, regularized=True)
            f.write(f"{a!r},{x!r},{show(log(lo))},{show(log(up))}\n")
with open(here / "beta.csv", "w") as f:
    f.write("# generate.py, mpmath, 60 digits\na,b,x,log_lower,log_upper\n")
    for a in [1e-3, 0.5, 1.0, 8.5, 40.5]:
        for b in [1e-3, 0.5, 7.0, 254.5]:
            for k in range(3):
                x = random.choice([random.random(), 10 ** random.uniform(-6, -1)])
                lo = betainc(mpf(a), mpf(b), 0, mpf(x), regularized=True)
                up = betainc(mpf(b), mpf(a), 0, 1 - mpf(x), regularized=True)
                f.write(f"{a!r},{b!r},{x!r},{show(log(lo))},{show(log(up))}\n")
