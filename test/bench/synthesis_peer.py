#!/usr/bin/env python3
"""Peer for the synthesis benchmark: the same disc on the same grid with plain numpy.

    python3 synthesis_peer.py DISC.json

DISC.json: phases[], width (cycles), columns, first_kms, step_kms, sigma_kms, k_accretor_kms, rim_kms,
inner_over_outer, beta, equivalent_width_kms. Prints one JSON line: milliseconds (minimum of repeated
calls in one process) and the samples of each way of doing it:
  elements   every phase by itself: velocities of all surface elements, np.histogram, np.convolve
  shared     the histogram is made once, in the accretor's frame, and shifted at each phase
"""
import json
import sys
import time

import numpy as np

RADII, AZIMUTHS, FINE = 100, 360, 6
NODES, WEIGHTS = np.polynomial.legendre.leggauss(3)


def best_ms(call, seconds=1.0, at_least=3):
    call()
    times, start = [], time.perf_counter()
    while time.perf_counter() - start < seconds or len(times) < at_least:
        t = time.perf_counter()
        call()
        times.append(time.perf_counter() - t)
    return 1e3 * min(times)


def disc(d):
    edges = np.linspace(d["inner_over_outer"], 1, RADII + 1)
    r = (edges[1:] + edges[:-1]) / 2
    theta = (np.arange(AZIMUTHS) + 0.5) * 2 * np.pi / AZIMUTHS
    light = np.repeat(r ** (1 - d["beta"]), AZIMUTHS)
    light *= d["equivalent_width_kms"] / light.sum()
    return np.repeat(d["rim_kms"] * r**-0.5, AZIMUTHS), np.tile(theta, RADII), light


def fine_grid(d):
    step = d["sigma_kms"] / FINE
    reach = d["rim_kms"] * d["inner_over_outer"] ** -0.5 + 6 * d["sigma_kms"] + 2 * d["k_accretor_kms"]
    edges = np.arange(-np.ceil(reach / step) - 0.5, np.ceil(reach / step) + 1) * step
    offsets = np.arange(-6 * FINE, 6 * FINE + 1) * step
    kernel = np.exp(-0.5 * (offsets / d["sigma_kms"]) ** 2)
    return edges, (edges[1:] + edges[:-1]) / 2, kernel / (kernel.sum() * step)


def elements(d):
    speed, theta, light = disc(d)
    edges, middle, kernel = fine_grid(d)
    velocity = d["first_kms"] + d["step_kms"] * np.arange(d["columns"])
    out = np.zeros((len(d["phases"]), d["columns"]))
    for i, phase in enumerate(d["phases"]):
        histogram = np.zeros(len(middle))
        for node, weight in zip(NODES, WEIGHTS):
            angle = 2 * np.pi * (phase + node * d["width"] / 2)
            v = speed * np.sin(theta + angle) - d["k_accretor_kms"] * np.sin(angle)
            histogram += weight / 2 * np.histogram(v, edges, weights=light)[0]
        out[i] = np.interp(velocity, middle, np.convolve(histogram, kernel, "same"))
    return out


def shared(d):
    speed, theta, light = disc(d)
    edges, middle, kernel = fine_grid(d)
    velocity = d["first_kms"] + d["step_kms"] * np.arange(d["columns"])
    profile = np.convolve(np.histogram(speed * np.sin(theta), edges, weights=light)[0], kernel, "same")
    out = np.zeros((len(d["phases"]), d["columns"]))
    for i, phase in enumerate(d["phases"]):
        for node, weight in zip(NODES, WEIGHTS):
            angle = 2 * np.pi * (phase + node * d["width"] / 2)
            out[i] += weight / 2 * np.interp(velocity + d["k_accretor_kms"] * np.sin(angle), middle, profile)
    return out


if __name__ == "__main__":
    with open(sys.argv[1]) as file:
        problem = json.load(file)
    for name, way in (("elements", elements), ("shared", shared)):
        print(json.dumps({"peer": name, "ms": best_ms(lambda: way(problem)),
                          "samples": [round(x, 7) for x in way(problem).ravel()]}))
