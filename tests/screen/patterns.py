"""Sparsity patterns for tests, and how they are drawn."""

from __future__ import annotations

import numpy as np
from scipy.sparse import csr_array

from lpview.screen.picture import draw
from lpview.screen.picture_grid import Pattern
from lpview.screen.picture_view import lay_out, whole


def pattern(m, n, density=0.1, seed=0, names=None):
    rng = np.random.default_rng(seed)
    dense = np.where(rng.random((m, n)) < density, rng.integers(1, 9, (m, n)), 0).astype(float)
    return Pattern(
        A=csr_array(dense),
        rows=tuple(names[:m] if names else (f"r{i}" for i in range(m))),
        columns=tuple(names[:n] if names else (f"c{j}" for j in range(n))),
        zero_slack=rng.random(m) < 0.5,
        nonzero=rng.random(n) < 0.5,
    )


def drawn(p, view=None, size=(80, 22), is_ascii=False, selected=None):
    view, layout = lay_out(p, view or whole(p), size, is_ascii)
    return view, layout, draw(p, view, layout, selected)


def texts(lines):
    return ["".join(text for text, _ in line) for line in lines]
