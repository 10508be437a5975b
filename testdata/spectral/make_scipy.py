"""Golden spectra for estimators/spectral: SciPy's coherence and csd, and dpss
concentrations. Run with Debian's python3-scipy: python3 make_scipy.py > scipy.json
Source: scipy.signal (version printed in the file)."""
import json
import numpy as np
import scipy
from scipy import signal

rng = np.random.default_rng(20261201)
n, fs = 4096, 200.0
x = np.round(rng.standard_normal(n), 6)
y = np.round(np.convolve(x, [0.5, 0.3, -0.2], "same") + rng.standard_normal(n), 6)
f, coh = signal.coherence(x, y, fs=fs, window="hann", nperseg=256, noverlap=128, detrend=False)
_, pxy = signal.csd(y, x, fs=fs, window="hann", nperseg=256, noverlap=128, detrend=False, scaling="density")
_, pxx = signal.welch(x, fs=fs, window="hann", nperseg=256, noverlap=128, detrend=False)
# One-sided densities: twice the two-sided one except at 0 and Nyquist.
# csd(a, b) averages conj(A) B.
json.dump({"versions": {"numpy": np.__version__, "scipy": scipy.__version__}, "fs": fs,
           "x": x.tolist(), "y": y.tolist(), "freq": f.tolist(), "coherence": coh.tolist(),
           "csd_re": pxy.real.tolist(), "csd_im": pxy.imag.tolist(), "psd_x": pxx.tolist()}, __import__("sys").stdout)
