"""The annotated beats as arrays: windows of every beat, and the readers' marks relative to its fiducial.

Read by train.py. `windows.rs` writes the windows (cargo bench --bench windows), wfdb reads the marks."""
import csv
import numpy as np
import wfdb

LEADS = ['I', 'II', 'III', 'aVR', 'aVL', 'aVF', 'V1', 'V2', 'V3', 'V4', 'V5', 'V6']
MARKS = ['p_onset', 'p_peak', 'p_offset', 'qrs_onset', 'qrs_peak', 'qrs_offset', 't_peak', 't_offset']
LENGTH, FIDUCIAL, RATE = 288, 100, 250.0
QRS = set('NLRBAaJSVrFejnE/fQ?')


def waves(path, extension):
    """(wave, onset, peak, offset) in samples; a mark that the reader left out is NaN."""
    note = wfdb.rdann(path, extension)
    at, symbol = note.sample, note.symbol
    found = []
    for i, s in enumerate(symbol):
        name = 'p' if s == 'p' else 't' if s == 't' else 'qrs' if s in QRS else None
        if name:
            onset = at[i - 1] if i and symbol[i - 1] == '(' else np.nan
            offset = at[i + 1] if i + 1 < len(symbol) and symbol[i + 1] == ')' else np.nan
            found.append((name, onset, at[i], offset))
    return found


def per_beat(marks, fiducials, rate):
    """[beats, 8] ms relative to the fiducial, NaN where unmarked; [beats] whether the reader marked the QRS."""
    out = np.full((len(fiducials), len(MARKS)), np.nan)
    of = {name: [m for m in marks if m[0] == name] for name in ('p', 'qrs', 't')}
    seen = np.zeros(len(fiducials), bool)
    for b, f in enumerate(fiducials):
        ms = lambda x: (x - f) * 1000 / rate
        near = [m for m in of['qrs'] if abs(ms(m[2])) < 150]
        if not near:
            continue
        q = min(near, key=lambda m: abs(ms(m[2])))
        seen[b] = True
        out[b, 3:6] = [ms(x) for x in q[1:]]
        before = [m for m in of['qrs'] if m[2] < q[2]]
        after = [m for m in of['qrs'] if m[2] > q[2]]
        low = max(before[-1][2] if before else -np.inf, f - 0.400 * rate)
        high = min(after[0][2] if after else np.inf, f + 0.900 * rate)
        p = [m for m in of['p'] if low < m[2] < q[2]]
        t = [m for m in of['t'] if q[2] < m[2] < high]
        if p:
            out[b, 0:3] = [ms(x) for x in p[-1][1:]]
        if t:
            out[b, 6:8] = [ms(x) for x in t[0][2:]]
    return out, seen


def load(folder, data, name):
    """One dictionary a record: x [beats, leads, 288] mV, valid [beats, 288], marks [beats, leads, 8] ms,
    seen [beats], cls [beats], lead [leads] (12 for one that is none of the twelve)."""
    values = np.fromfile(f'{folder}/{name}.f32', '<f4')
    records, classes = {}, {}
    for record, kind, number, at, cls, paced, start, end, used, names, place in csv.reader(open(f'{folder}/{name}.csv')):
        leads = names.split()
        place = int(place)
        x = values[place:place + len(leads) * LENGTH].reshape(len(leads), LENGTH)
        if kind == 'class':
            classes.setdefault(record, {})[int(number)] = x
            continue
        t = (np.arange(LENGTH) - FIDUCIAL) / RATE
        r = records.setdefault(record, dict(name=record, x=[], valid=[], at=[], cls=[], leads=leads))
        r['x'].append(x)
        r['valid'].append((t >= float(start)) & (t < float(end)))
        r['at'].append(float(at))
        r['cls'].append(int(cls))
    out = []
    for record, r in records.items():
        path = f'{data}/{name}/{record}'
        rate = 500 if name == 'ludb' else 250
        fiducials = np.array(r['at']) * rate
        if name == 'ludb':
            each = [per_beat(waves(path, lead.lower()), fiducials, rate) for lead in r['leads']]
        else:
            each = [per_beat(waves(path, 'q1c'), fiducials, rate)] * len(r['leads'])
        seen = np.mean([s for _, s in each], 0) > 0.5
        out.append(dict(name=record, x=np.array(r['x']), valid=np.array(r['valid']), cls=np.array(r['cls']),
                        at=np.array(r['at']), marks=np.stack([m for m, _ in each], 1), seen=seen,
                        lead=np.array([LEADS.index(l) if l in LEADS else 12 for l in r['leads']]),
                        classes=classes.get(record, {})))
    return out
