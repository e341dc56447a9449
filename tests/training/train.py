#!/usr/bin/env python3
"""Trains the network that marks a representative beat.

    cargo bench --bench windows -- DATA WINDOWS
    python3 tests/training/train.py WINDOWS DATA OUT [--fold K/N] [--steps S] [--seed N] [--fast PART]

Without --fold all records are used; --fast is the part of the examples that is made a fast rhythm. Needs jax, optax, numpy and wfdb. Seeded: the same versions give the same weights.
The shape of the network and its training stand in DEVELOPERS.md."""
import argparse
import time
import warnings
import jax
import jax.numpy as jnp
import numpy as np
import optax
import wfdb
import data as D

CHANNELS = (16, 16, 24, 32)                                  # at 125, 62.5, 31.25 and 15.625 samples a second
SCALE = jnp.array([13, 10, 12, 8, 10, 8.5, 16, 18.0])       # what a mark's error is counted in, ms
TIMES = (jnp.arange(D.LENGTH // 2) * 2 + 0.5 - D.FIDUCIAL) * 1000 / D.RATE   # middle of a pair of samples, ms

DELTA = 8.0


# ---- the network ------------------------------------------------------------------------------------------------
def init(key):
    p = {}
    keys = iter(jax.random.split(key, 64))

    def conv(name, k, i, o, gain=1.0, bias=0.0):
        p[name] = dict(w=jax.random.normal(next(keys), (k, i, o)) * np.sqrt(2 / (k * i)) * gain,
                       b=jnp.full((o,), bias))

    c = CHANNELS
    conv('stem', 7, 4, c[0])
    p['lead'] = dict(w=jnp.zeros((13, c[0])))
    for l in range(4):
        if l:
            conv(f'down{l}', 1, 2 * c[l - 1], c[l])
        for side in 'du' if l < 3 else 'd':
            conv(f'{side}{l}a', 5, c[l], c[l])
            conv(f'{side}{l}b', 5, c[l], c[l], 0.1)
        if l < 3:
            conv(f'up{l}', 1, c[l + 1], c[l])
            if l:
                conv(f'fu{l}', 1, c[l], c[l], 0.5)
        if l:
            conv(f'fd{l}', 1, c[l], c[l], 0.5)
    conv('e3a', 5, c[3], c[3])
    conv('e3b', 5, c[3], c[3], 0.1)
    conv('fe3', 1, c[3], c[3], 0.5)
    conv('head', 1, c[0], len(D.MARKS))
    conv('there', 1, c[3], 2)
    conv('set', 1, 1, len(D.MARKS), 0.0)                      # habits of the second set's readers
    return p


def apply(p, x, lead, live):
    """x [B, L, 288] mV, lead [B, L], live [B, L] -> marks [B, L, 8] ms, logits [B, L, 144, 8], presence [B, 2]."""
    B, L, T = x.shape
    s = jnp.maximum(jnp.sqrt(jnp.mean(x ** 2, -1, keepdims=True)), 0.03)
    u = jnp.stack([jnp.clip(x / s, -8, 8) / 2, jnp.arcsinh(x / 0.05) / 2], -1)
    h = u.reshape(B * L, T // 2, 4)
    share = live / jnp.maximum(live.sum(1, keepdims=True), 1)

    def conv(name, h):
        w = p[name]['w']
        if w.shape[0] == 1:
            return h @ w[0] + p[name]['b']
        return jax.lax.conv_general_dilated(h, w, (1,), 'SAME', dimension_numbers=('NWC', 'WIO', 'NWC')) + p[name]['b']

    def block(name, h):
        return h + conv(name + 'b', jax.nn.relu(conv(name + 'a', jax.nn.relu(h))))

    def fuse(name, h):
        g = h.reshape(B, L, *h.shape[1:])
        mean = jnp.einsum('bl,bltc->btc', share, g)
        return (g + conv(name, jax.nn.relu(mean))[:, None]).reshape(h.shape)

    def up2(h):
        before = jnp.concatenate([h[:, :1], h[:, :-1]], 1)
        after = jnp.concatenate([h[:, 1:], h[:, -1:]], 1)
        return jnp.stack([0.75 * h + 0.25 * before, 0.75 * h + 0.25 * after], 2).reshape(h.shape[0], -1, h.shape[2])

    h = conv('stem', h) + p['lead']['w'][lead.reshape(-1)][:, None]
    skips = []
    for l in range(4):
        if l:
            h = conv(f'down{l}', jax.nn.relu(h).reshape(h.shape[0], h.shape[1] // 2, -1))
        h = block(f'd{l}', h)
        if l:
            h = fuse(f'fd{l}', h)
        skips.append(h)
    h = fuse('fe3', block('e3', h))
    pool = jnp.einsum('bl,bltc->btc', share, jax.nn.relu(h).reshape(B, L, *h.shape[1:]))
    there = jnp.max(conv('there', pool), 1)
    for l in (2, 1, 0):
        h = skips[l] + up2(conv(f'up{l}', jax.nn.relu(h)))
        if l:
            h = fuse(f'fu{l}', h)
        h = block(f'u{l}', h)
    logits = conv('head', jax.nn.relu(h)).reshape(B, L, -1, len(D.MARKS))
    heat = jax.nn.softmax(logits, 2)
    return jnp.einsum('bltm,t->blm', heat, TIMES), logits, there


def loss(p, batch, second):
    x, lead, live, marks, weight, there, known = batch
    found, logits, thinks = apply(p, x, lead, live)
    if second:
        found = found + p['set']['b'] * 10
    marked = jnp.isfinite(marks)
    target = jnp.where(marked, marks, 0.0)
    w = marked * weight[..., None]
    error = jnp.where(marked, (found - target) / SCALE, 0.0)
    huber = optax.losses.huber_loss(error, delta=DELTA)
    blur = jnp.exp(-((TIMES[:, None] - (target - (p['set']['b'] * 10 if second else 0))[:, :, None]) / 10.0) ** 2 / 2)
    blur = blur / (blur.sum(2, keepdims=True) + 1e-6)
    entropy = -(blur * jax.nn.log_softmax(logits, 2)).sum(2)
    part = ((huber + 0.3 * entropy) * w).sum() / (w.sum() + 1)
    presence = (optax.losses.sigmoid_binary_cross_entropy(thinks, there) * known).sum() / (known.sum() + 1)
    return part + 0.5 * presence


# ---- the examples -----------------------------------------------------------------------------------------------
class Examples:
    def __init__(self, records, noise, rng, part_fast):
        self.rng, self.noise, self.part_fast = rng, noise, part_fast
        self.groups = []
        for r in records:
            for c in np.unique(r['cls'][r['seen']]):
                at = np.where((r['cls'] == c) & r['seen'])[0]
                self.groups.append((r, at))
        self.p = np.array([len(at) ** 0.7 for _, at in self.groups])
        self.p /= self.p.sum()

    def one(self):
        rng = self.rng
        r, at = self.groups[rng.choice(len(self.groups), p=self.p)]
        k = len(at) if rng.random() < 0.4 else max(1, min(len(at), int(np.exp(rng.uniform(0, np.log(len(at) + 1))))))
        if r['x'].shape[1] == 2:                              # neighbours in time, as a long recording is averaged
            i = rng.integers(len(at))
            near = np.argsort(np.abs(r['at'][at] - r['at'][at[i]]))[:max(k, 1)]
            pick = at[near[:12]]
        else:
            pick = rng.choice(at, k, replace=False)
        v = r['valid'][pick].astype(np.float32)
        n = v.sum(0)
        x = (r['x'][pick] * v[:, None]).sum(0) / np.maximum(n, 1)
        ok = np.where(n > 0)[0]
        x[:, :ok[0]] = x[:, ok[0]:ok[0] + 1]
        x[:, ok[-1]:] = x[:, ok[-1]:ok[-1] + 1]
        m = r['marks'][pick]
        with warnings.catch_warnings():
            warnings.simplefilter('ignore')                   # a wave that no reader marked
            middle = np.nanmedian(m, 0)
            marks = np.nanmean(np.where(np.abs(m - middle) < 60, m, np.nan), 0)
        there = np.array([np.isfinite(m[:, :, 1]).any(1).mean(), np.isfinite(m[:, :, 6]).any(1).mean()])
        marks[:, 0:3] = np.where(there[0] >= 0.5, marks[:, 0:3], np.nan)
        marks[:, 6:8] = np.where(there[1] >= 0.5, marks[:, 6:8], np.nan)
        known = ((there > 0.8) | (there < 0.2)).astype(np.float32)
        # Changes that leave the marks true.
        t = (np.arange(D.LENGTH) - D.FIDUCIAL).astype(np.float64)
        knots = np.array([D.FIDUCIAL * -4.0 - 400, -60, 60, 1600])            # ms
        within, before, after = np.exp(rng.uniform(-0.15, 0.15)), np.exp(rng.uniform(-0.25, 0.25)), np.exp(rng.uniform(-0.25, 0.25))
        if rng.random() < 0.3:
            within = before = after = 1.0
        moved = np.array([-60 * within + (knots[0] + 60) * before, -60 * within, 60 * within, 60 * within + 1540 * after])
        moved += rng.uniform(-12, 12)
        ms = t * 1000 / D.RATE
        x = np.stack([np.interp(np.interp(ms, moved, knots), ms, row) for row in x])
        marks = np.interp(marks, knots, moved) + 0 * marks
        if self.part_fast and rng.random() < self.part_fast and there[1] >= 0.5 and np.isfinite(marks[:, [3, 5, 7]]).any(0).all():
            x, marks, there, known = self.fast(x, marks, there, known)
        if rng.random() < 0.2:
            kernel = np.exp(-(np.arange(-4, 5) / rng.uniform(0.7, 1.3)) ** 2 / 2)
            x = np.stack([np.convolve(np.pad(row, 4, 'edge'), kernel / kernel.sum(), 'valid') for row in x])
        x = x * np.exp(rng.normal(0, 0.25)) * np.exp(rng.normal(0, 0.15, (len(x), 1)))
        if rng.random() < 0.2:
            x = x * rng.choice([-1, 1], (len(x), 1), p=[0.3, 0.7])
        if rng.random() < 0.5:
            level = np.exp(rng.uniform(np.log(0.002), np.log(0.025)))
            for row in x:
                at = rng.integers(len(self.noise) - D.LENGTH)
                row += self.noise[at:at + D.LENGTH] * level * np.exp(rng.normal(0, 0.4))
        if rng.random() < 0.4:
            x = x + rng.normal(0, 0.03, (len(x), 1)) * t / D.LENGTH * 2 + rng.normal(0, 0.02, (len(x), 1))
        lead = np.where(rng.random(len(x)) < 0.1, 12, r['lead'])
        live = np.ones(len(x), np.float32)
        if len(x) > 2 and rng.random() < 0.35:
            keep = rng.integers(1, len(x)) if rng.random() < 0.5 else rng.integers(1, 4)
            live[:] = 0
            live[rng.choice(len(x), keep, replace=False)] = 1
        weight = np.full(len(x), 1.0, np.float32)
        if live.sum() < len(x):
            weight = live
        return x.astype(np.float32), lead, live, marks.astype(np.float32), weight, there.round().astype(np.float32), known

    def fast(self, x, marks, there, known):
        """The beat in a fast rhythm: T sooner, the beats before and after laid beside it, P gone or on the T before."""
        rng = self.rng
        t = (np.arange(D.LENGTH) - D.FIDUCIAL) * 1000 / D.RATE
        on, off, end = (np.nanmedian(marks[:, m]) for m in (3, 5, 7))
        rr = rng.uniform(270, 480)
        sooner = np.clip((rng.uniform(0.5, 0.8) * rr - off) / max(end - off, 60), 0.4, 1.05)
        knots, moved = np.array([-1500, off, off + 1500]), np.array([-1500, off, off + 1500 * sooner])
        marks = np.interp(marks, knots, moved) + 0 * marks
        end = off + (end - off) * sooner
        x = np.stack([np.interp(np.interp(t, moved, knots), t, row) for row in x])
        y = x - x[:, np.argmin(np.abs(t - (on - 10)))][:, None]
        y *= np.clip((end + 60 - t) / 40, 0, 1)
        without = rng.random() < 0.6
        if without:
            y *= np.clip((t - (on - 30)) / 20, 0, 1)
            marks[:, 0:3] = np.nan
            there, known = np.array([0.0, there[1]]), np.array([1.0, known[1]], np.float32)
        elif not end - rr < np.nanmin(marks[:, 0], initial=np.inf) - 20:    # P on the T before: no one can tell
            marks[:, 0:3] = np.nan
            known = np.array([0.0, known[1]], np.float32)
        if rng.random() < 0.35:                               # a wave somewhere behind the QRS that is none of the three
            at, width = rng.uniform(off, max(rr - 90, off + 10)), rng.uniform(55, 95)
            bump = np.where(np.abs(t - at) < width / 2, 0.5 + 0.5 * np.cos(2 * np.pi * (t - at) / width), 0)
            y = y + bump * rng.normal(0, 0.07, (len(y), 1))
        at = lambda row, delay: np.interp(t - delay, t, row, left=0, right=0)
        y = np.stack([row + at(row, rr) + at(row, -rr) for row in y])
        first, last = np.argmax(t >= 80 - rr), np.argmax(t > rr - 50)
        y[:, :first] = y[:, first:first + 1]
        y[:, last:] = y[:, last - 1:last]
        return y, marks, there, known

    def batch(self, size):
        parts = [self.one() for _ in range(size)]
        return tuple(jnp.asarray(np.stack(part)) for part in zip(*parts))


def muscle(folder):
    """Muscle noise at 250 Hz, RMS 1, without its slow part."""
    import os
    names = [f[:-4] for f in sorted(os.listdir(folder)) if f.endswith('.hea')]
    x = wfdb.rdrecord(f'{folder}/{names[0]}').p_signal.mean(1)
    t = np.arange(0, len(x) - 1, 360 / 250.0)
    x = np.interp(t, np.arange(len(x)), x)
    x = x - np.convolve(x, np.ones(125) / 125, 'same')
    return x / x.std()


# ---- training ---------------------------------------------------------------------------------------------------
def main():
    a = argparse.ArgumentParser(description=__doc__)
    a.add_argument('windows'); a.add_argument('data'); a.add_argument('out')
    a.add_argument('--fold'); a.add_argument('--steps', type=int, default=2500); a.add_argument('--fast', type=float, default=0.0)
    a.add_argument('--seed', type=int, default=1)
    a = a.parse_args()
    rng = np.random.default_rng(a.seed)
    noise = muscle(f'{a.data}/noise')
    sets = []
    for name in ('ludb', 'qtdb'):
        records = D.load(a.windows, a.data, name)
        if a.fold:
            k, n = map(int, a.fold.split('/'))
            records = [r for i, r in enumerate(records) if i % n != k]
        sets.append(Examples(records, noise, rng, a.fast))
    p = init(jax.random.PRNGKey(a.seed))
    rate = optax.warmup_cosine_decay_schedule(0, 3e-3, 100, a.steps, 0)
    tx = optax.chain(optax.clip_by_global_norm(1.0), optax.adamw(rate, b2=0.99, weight_decay=0.01))
    state = tx.init(p)

    @jax.jit
    def step(p, mean, state, one, two, decay):
        f = lambda p: loss(p, one, False) + 0.6 * loss(p, two, True)
        value, g = jax.value_and_grad(f)(p)
        update, state = tx.update(g, state, p)
        p = optax.apply_updates(p, update)
        return p, jax.tree.map(lambda m, q: decay * m + (1 - decay) * q, mean, p), state, value

    mean, start, sums = p, time.time(), 0.0
    for i in range(a.steps):
        p, mean, state, value = step(p, mean, state, sets[0].batch(12), sets[1].batch(16), min(0.998, (1 + i) / (10 + i)))
        sums += float(value)
        if i % 100 == 99:
            print(f'{i + 1} loss {sums / 100:.3f} {(time.time() - start) / (i + 1):.3f} s/step', flush=True)
            sums = 0.0
    np.savez(a.out, **{f'{n}.{k}': np.asarray(v) for n, d in mean.items() for k, v in d.items()})


if __name__ == '__main__':
    main()
