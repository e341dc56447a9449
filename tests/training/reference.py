#!/usr/bin/env python3
"""Writes what JAX makes of three drawn windows, for tests/measure/network.rs: reference.py OUT.json IN.npz [IN.npz ...]"""
import json
import sys
import jax
import jax.numpy as jnp
import numpy as np
import data as D
import train as T


def drawn():
    """Three leads of a beat: P, Q, R, S and T as Gaussians (height mV, middle s, width s)."""
    waves = [(0.12, -0.16, 0.022), (-0.08, -0.025, 0.008), (1.0, 0.0, 0.010), (-0.2, 0.028, 0.009), (0.3, 0.26, 0.045)]
    gains = [(0.6, 0.5, 0.7, 0.4, 0.8), (1.0, 1.0, 1.0, 1.0, 1.0), (0.3, 0.0, 0.2, 5.0, -0.4)]
    t = (np.arange(D.LENGTH) - D.FIDUCIAL) / D.RATE
    return np.array([sum(g * h * np.exp(-((t - m) / w) ** 2 / 2) for g, (h, m, w) in zip(gain, waves))
                     for gain in gains], np.float32)


def load(path):
    nets = {}
    for key, value in np.load(path).items():
        name, part = key.rsplit('.', 1)
        nets.setdefault(name, {})[part] = jnp.asarray(value)
    return nets


if __name__ == '__main__':
    x = jnp.asarray(drawn())[None]
    lead = jnp.array([[0, 1, 12]])
    marks, odds = [], []
    for path in sys.argv[2:]:
        with jax.default_matmul_precision('highest'):
            found, _, there = T.apply(load(path), x, lead, jnp.ones((1, 3)))
        marks.append(np.asarray(found[0]))
        odds.append(np.asarray(there[0]))
    # The first two speak of P and QRS, all of T.
    both = np.concatenate([np.mean(marks[:2], 0)[:, :6], np.mean(marks, 0)[:, 6:]], 1).astype(float)
    out = dict(marks_ms=both.round(3).tolist(), p=round(float(np.mean(odds[:2], 0)[0]), 4), t=round(float(np.mean(odds, 0)[1]), 4))
    json.dump(out, open(sys.argv[1], 'w'), indent=1)
