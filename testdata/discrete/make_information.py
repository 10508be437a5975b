"""Golden values for estimators/discrete: plug-in entropy (SciPy) and information
(scikit-learn), and leave-one-sample-out jackknives by brute force (NumPy).
Run with Debian's python3-sklearn: python3 make_information.py > information.json"""
import json
import sys
import numpy as np
import scipy
import sklearn
from scipy.stats import entropy
from sklearn.metrics import mutual_info_score

rng = np.random.default_rng(20261201)


def information(table):
    i, j = np.nonzero(table)
    n = table[i, j]
    return mutual_info_score(np.repeat(i, n), np.repeat(j, n)) / np.log(2)


def jackknife(table, statistic):
    total, left_out = table.sum(), 0.0
    for cell in zip(*np.nonzero(table)):
        less = table.copy()
        less[cell] -= 1
        left_out += table[cell] * statistic(less)
    return total * statistic(table) - (total - 1) / total * left_out


tables = []
for rows, columns, samples in [(2, 2, 30), (3, 5, 60), (8, 8, 300), (8, 8, 4000), (1, 6, 50), (6, 3, 12)]:
    p = rng.dirichlet(np.full(rows * columns, 0.7))
    table = rng.multinomial(samples, p).reshape(rows, columns)
    h = lambda c: entropy(c.ravel(), base=2)
    tables.append({"counts": table.tolist(), "entropy": h(table), "entropy_jackknife": jackknife(table, h),
                   "information": information(table), "information_jackknife": jackknife(table, information)})
json.dump({"versions": {"numpy": np.__version__, "scipy": scipy.__version__, "sklearn": sklearn.__version__},
           "tables": tables}, sys.stdout)
