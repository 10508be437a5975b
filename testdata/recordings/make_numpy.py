"""Writes one small recording in every form of NumPy archive that is read, and as text.

Run with /usr/bin/python3 in this folder. Made with Python 3.11, NumPy 1.24 (Debian 12).
All times are multiples of 1/1024 s, so that float32 holds them exactly.
"""
import gzip
import sys
import numpy as np
from numpy.lib import format as npy
import zipfile

print(sys.version.split()[0], np.__version__)
rng = np.random.default_rng(5)
dt, samples, spikes = 1 / 128, 256, 300
soma, dendrite = rng.integers(-500, 500, (2, samples)) / 64.0
unit = rng.integers(0, 12, spikes)
time = rng.integers(0, 2048, spikes) / 1024.0
keep = np.unique(unit * 10000 + (time * 1024).astype(int), return_index=True)[1]
keep.sort()
unit, time = unit[keep], time[keep]
streams = dict(dt_s=dt, stream_soma=soma, stream_dendrite=dendrite)

np.savez("plain.npz", unit=unit.astype(np.int32), time_s=time, **streams)
np.savez_compressed("deflated.npz", unit=unit.astype(np.uint16), time_s=time, **streams)
np.savez("single.npz", unit=unit.astype(np.int8), time_s=time.astype(np.float32), start_s=0, dt_s=np.float32(dt),
         stream_soma=soma.astype(np.float32), stream_dendrite=(dendrite * 64).astype(np.int64) / 64)
np.savez("big_endian.npz", unit=unit.astype(">i4"), time_s=time.astype(">f8"), dt_s=np.array([dt], ">f8"),
         stream_soma=soma.astype(">f4"), stream_dendrite=dendrite.astype(">f8"))
order = np.lexsort((time, unit))
np.savez("sorted.npz", unit=unit[order].astype(np.uint64), time_s=time[order], **streams)

with zipfile.ZipFile("versions.npz", "w") as z:
    for i, (name, values) in enumerate(dict(unit=unit, time_s=time, **streams).items()):
        with z.open(name + ".npy", "w") as out:
            npy.write_array(out, np.asanyarray(values), version=[(1, 0), (2, 0), (3, 0)][i % 3])

later = 1000.0  # both clocks start late
np.savez("spikes.npz", unit=unit, time_s=time + later)
np.savez("streams.npz", start_s=later, **streams)

with open("spikes.csv", "w") as f:
    f.write("unit,time_s\n" + "".join(f"{u},{t!r}\n" for u, t in zip(unit, time.tolist())))
text = "time_s,soma,dendrite\n" + "".join(f"{i * dt!r},{x!r},{y!r}\n" for i, (x, y) in enumerate(zip(soma.tolist(), dendrite.tolist())))
with open("streams.csv", "w") as f:
    f.write(text)
with open("streams.csv.gz", "wb") as f:
    f.write(gzip.compress(text.encode(), mtime=0))
