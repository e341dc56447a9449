#!/usr/bin/env python3
"""Writes trained networks as the program reads them: pack.py OUT.bin IN.npz [IN.npz ...]"""
import sys
import numpy as np

ORDER = (['stem', 'lead'] + [f'down{l}' for l in (1, 2, 3)] + [f'd{l}{x}' for l in range(4) for x in 'ab']
         + [f'fd{l}' for l in (1, 2, 3)] + ['e3a', 'e3b', 'fe3', 'there'] + [f'up{l}' for l in range(3)]
         + [f'fu{l}' for l in (1, 2)] + [f'u{l}{x}' for l in range(3) for x in 'ab'] + ['head'])


def flat(z):
    return np.concatenate([z[f'{name}.{k}'].ravel() for name in ORDER for k in 'wb' if f'{name}.{k}' in z])


if __name__ == '__main__':
    np.concatenate([flat(np.load(path)) for path in sys.argv[2:]]).astype('<f4').tofile(sys.argv[1])
