"""Random numbers that depend on what they are for, not on the order of asking.

A counter-based generator (Philox, [S11]) is keyed by seed, purpose and index: the same three
give the same numbers in any process, whatever was drawn before, so that a resumed run and a
study on many processors agree with a run in one piece.

[S11] Salmon, Moraes, Dror & Shaw 2011, Parallel random numbers: as easy as 1, 2, 3, Proc.
SC11.
"""

import hashlib

import numpy as np


def generator(seed: int, purpose: str, index: int = 0) -> np.random.Generator:
    """Return the generator that belongs to a seed, a purpose and an index.

    Parameters
    ----------
    seed : int
        Of the run, 0 to 2^64 - 1.
    purpose : str
        What the numbers are for; different purposes never share numbers.
    index : int
        Which of many, for instance a year or a member; 0 to 2^64 - 1.
    """
    digest = hashlib.sha256(purpose.encode()).digest()
    key = np.array([seed, int.from_bytes(digest[:8], "little")], dtype=np.uint64)
    counter = np.array([0, 0, 0, index], dtype=np.uint64)
    return np.random.Generator(np.random.Philox(key=key, counter=counter))
