"""Golden Slepian tapers for estimators/fourier: SciPy's signal.windows.dpss.
Run with Debian's python3-scipy: python3 make_dpss.py > dpss.json"""
import json
import sys
import numpy as np
import scipy
from scipy.signal.windows import dpss

out = {"versions": {"numpy": np.__version__, "scipy": scipy.__version__}, "cases": []}
for n, nw, k in [(64, 2, 3), (65, 4, 7), (1024, 2, 3), (1024, 4, 8)]:
    v, r = dpss(n, nw, k, norm=2, return_ratios=True)
    out["cases"].append({"n": n, "nw": nw, "k": k, "ratios": r.tolist(), "every": 1 if n < 100 else 31,
                         "tapers": [np.round(t[:: (1 if n < 100 else 31)], 12).tolist() for t in v]})
json.dump(out, sys.stdout)
