#!/usr/bin/python3
"""Maximum-entropy maps by scipy, for entropy_test.ts: python3 gen_entropy.py > entropy.json

Independent of the project: a dense matrix of Gaussians at pixel centres, the objective
chi-square - alpha S minimised by L-BFGS-B and polished by Newton steps with the dense Hessian.

positive: S = sum(f - m - f ln(f/m)), variables u = ln f (Skilling & Bryan 1984, MNRAS 211, 111).
signed:   S = sum(psi - 2m - f ln((psi + f)/2m)), psi = sqrt(f^2 + 4m^2) (Hobson & Lasenby 1998,
          MNRAS 298, 905).
"""
import json
import sys

import numpy as np
import scipy
from scipy.optimize import minimize

N, HALF, SIGMA, GAMMA, STEP, BINS = 21, 600.0, 60.0, 0.0, 45.0, 39
PHASES = (np.arange(14) + 0.3 * np.sin(3.0 * np.arange(14))) / 14
AREA = (2 * HALF / (N - 1)) ** 2
VELOCITY = (np.arange(BINS) - (BINS - 1) / 2) * STEP

axis = np.linspace(-HALF, HALF, N)
VX, VY = (a.ravel() for a in np.meshgrid(axis, axis))


def operator():
    rows = []
    for phi in PHASES:
        v = GAMMA - VX * np.cos(2 * np.pi * phi) + VY * np.sin(2 * np.pi * phi)
        rows.append(AREA * np.exp(-0.5 * ((VELOCITY[:, None] - v) / SIGMA) ** 2) / (np.sqrt(2 * np.pi) * SIGMA))
    return np.vstack(rows)


def blob(flux, x, y, s):
    return flux / (2 * np.pi * s * s) * np.exp(-0.5 * ((VX - x) ** 2 + (VY - y) ** 2) / s ** 2)


def positive(a, data, error, level, alpha):
    w = 1 / error ** 2

    def objective(u):
        f = np.exp(u)
        r = a @ f - data
        slope = 2 * a.T @ (w * r)
        return (w * r) @ r - alpha * np.sum(f - level - f * (u - np.log(level))), f * (slope + alpha * (u - np.log(level)))

    u = minimize(objective, np.full(a.shape[1], np.log(level)), jac=True, method="L-BFGS-B",
                 options=dict(maxiter=20000, maxfun=40000, ftol=1e-15, gtol=1e-14)).x
    f = np.exp(u)
    hessian = 2 * a.T @ (w[:, None] * a)
    for _ in range(30):  # Newton in f, damped to stay positive
        g = 2 * a.T @ (w * (a @ f - data)) + alpha * np.log(f / level)
        step = np.linalg.solve(hessian + np.diag(alpha / f), -g)
        worst = np.min(step / f)
        f = f + step * min(1.0, 0.9 / max(1e-300, -worst)) if worst < 0 else f + step
    return f, float(np.max(np.abs(g) * np.sqrt(f)) / np.sqrt(np.sum(f * (alpha * np.log(f / level)) ** 2)))


def signed(a, data, error, level, alpha):
    w = 1 / error ** 2
    f = np.zeros(a.shape[1])
    hessian = 2 * a.T @ (w[:, None] * a)

    def value(f):
        psi = np.sqrt(f * f + 4 * level * level)
        r = a @ f - data
        return (w * r) @ r - alpha * np.sum(psi - 2 * level - f * np.arcsinh(f / (2 * level)))

    for _ in range(200):
        psi = np.sqrt(f * f + 4 * level * level)
        g = 2 * a.T @ (w * (a @ f - data)) + alpha * np.arcsinh(f / (2 * level))
        step = np.linalg.solve(hessian + np.diag(alpha / psi), -g)
        t = 1.0
        while value(f + t * step) > value(f) and t > 1e-8:
            t *= 0.5
        f = f + t * step
    return f, float(np.max(np.abs(step)) / np.max(np.abs(f)))


def case(kind, truth, noise, level, alpha, seed):
    a = operator()
    rng = np.random.default_rng(seed)
    error = np.round(noise * (1 + 0.5 * rng.random(a.shape[0])), 6)
    data = np.round(a @ truth + error * rng.standard_normal(a.shape[0]), 6)
    f, left = (positive if kind == "positive" else signed)(a, data, error, level, alpha)
    r = (a @ f - data) / error
    return dict(id=f"entropy-{kind}", kind=kind, pixels=N, half_width_kms=HALF, sigma_kms=SIGMA, bins=BINS,
                first_kms=VELOCITY[0], step_kms=STEP, phases=[round(p, 12) for p in PHASES.tolist()],
                level=level, alpha=alpha, error=error.tolist(), data=data.tolist(),
                reduced_chi_square=float(r @ r / r.size), residual_of_gradient=left,
                map=[float(f"{x:.10g}") for x in f])


PHASES = np.round(PHASES, 12)
disc = blob(300, 0, -60, 200)
out = dict(
    topic="entropy",
    source=__doc__,
    library=f"Python {sys.version.split()[0]}, numpy {np.__version__}, scipy {scipy.__version__}",
    tolerance="map: 1e-6 of its peak (both solutions are converged far below; misalignment 1e-12)",
    cases=[
        case("positive", disc + blob(60, -250, 150, 60), 0.02, 300 / (N * N * AREA), 8000.0, 1),
        case("signed", blob(60, -250, 150, 80) - blob(40, 200, -100, 90), 0.02, 1e-5, 4000.0, 2),
    ],
)
json.dump(out, sys.stdout, indent=None, separators=(", ", ": "))
print()
