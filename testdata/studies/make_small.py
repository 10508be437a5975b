#!/usr/bin/python3
"""Writes small.csv and small-streams.csv, a recording with known faults, beside
this script: 40 s, four units, one stream at 50 Hz.

  a   singles and bursts (three spikes 4 ms apart), steady
  b   follows the first spikes of c 5 ms later: the lost rest of c's bursts
  c   singles, 4 a second
  d   falls silent after 15 s, and has four intervals of 0.4 ms
  stream "drive": plus or minus one for 0.1 s each, with a little noise

Python 3 standard library alone, no outside source: made for this project.
"""
import csv, random

random.seed(11)
spikes = []
t = 0.1
while t < 39.8:
    spikes.append(("a", t))
    if random.random() < 0.3:
        spikes += [("a", t + 0.004), ("a", t + 0.008)]
    t += 0.1 + random.expovariate(4)
t = 0.2
while t < 39.8:
    spikes.append(("c", t))
    if random.random() < 0.6:
        spikes.append(("b", t + 0.005))
    t += 0.08 + random.expovariate(5)
t = 0.3
k = 0
while t < 15:
    spikes.append(("d", t))
    if k < 4:
        spikes.append(("d", t + 0.0004))
        k += 1
    t += 0.05 + random.expovariate(8)
spikes.sort(key=lambda s: s[1])
with open("small.csv", "w") as f:
    w = csv.writer(f, lineterminator="\n")
    w.writerow(["unit", "time_s"])
    for unit, time in spikes:
        w.writerow([unit, "%.6f" % time])
white = [random.random() for _ in range(2005)]
with open("small-streams.csv", "w") as f:
    w = csv.writer(f, lineterminator="\n")
    w.writerow(["time_s", "drive"])
    for i in range(2000):
        # Two-valued with soft edges: far from Gaussian.
        x = white[i // 5] > 0.5
        w.writerow(["%.2f" % (i * 0.02), "%.4f" % ((1 if x else -1) + 0.1 * white[i])])
