"""What one run of the screen took, and tables of several."""

from __future__ import annotations

import statistics
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field

from tests.benchmarks.timed import Shown, TimedTerminal


@dataclass
class Session:
    """One run of the program, with what was measured."""

    lines: int
    columns: int
    rows: int
    times: dict[str, list[float]] = field(default_factory=dict)
    """Seconds, by what was done."""
    processor: dict[str, list[float]] = field(default_factory=dict)
    """Seconds of processor time, likewise; a busy machine disturbs it least."""
    memory: dict[str, int] = field(default_factory=dict)
    """Bytes beyond the examination."""

    def timed(
        self, name: str, terminal: TimedTerminal, key: str, shown: Shown, *quiet: float,
        styles: bool = True,
    ) -> None:  # fmt: skip
        """Press a key and keep the time under a name."""
        used = terminal.processor()
        taken = terminal.timed_press(key, shown, *quiet, styles=styles)
        self.times.setdefault(name, []).append(taken)
        self.processor.setdefault(name, []).append(terminal.processor() - used)


def table(sessions: Sequence[Session], columns: int, rows: int) -> Iterator[str]:
    """Medians and 95th percentiles of one screen size, a line for each thing done."""
    yield f"{columns}x{rows}, milliseconds: median / 95th percentile / median of processor time"
    yield f"  {'lines each way':24}" + "".join(
        f"{f'{s.lines:,}' if s.lines else 'bare':>24}" for s in sessions
    )
    for name in dict.fromkeys(name for s in sessions for name in s.times):
        cells = (summary(s.times.get(name, []), s.processor.get(name, [])) for s in sessions)
        yield f"  {name:24}" + "".join(f"{cell:>24}" for cell in cells)
    for name in ("at rest", "at most"):
        sizes = "".join(f"{s.memory.get(name, 0) / 2**20:>21.0f} MB" for s in sessions)
        yield f"  {'memory ' + name:24}{sizes}"


def summary(times: Sequence[float], processor: Sequence[float] = ()) -> str:
    """Median, 95th percentile, and median of processor time, in milliseconds."""
    if not times:
        return "-"
    figures = [statistics.median(times), high(times)]
    figures += [statistics.median(processor)] if processor else []
    return " / ".join(f"{figure * 1e3:.1f}" for figure in figures)


def high(times: Sequence[float]) -> float:
    """The 95th percentile: the least time that 95 % do not exceed."""
    return sorted(times)[-(-95 * len(times) // 100) - 1]


def goals(sessions: Sequence[Session]) -> Iterator[str]:
    """Each goal with the figure that it is about."""
    by_size = {s.lines: s for s in sessions}
    largest, least = by_size[max(by_size)], by_size[min(by_size)]
    down = [s.times["one line down"] for s in sessions]
    medians = [statistics.median(times) * 1e3 for times in down]
    yield goal("one line down, median, ms", max(medians), 16)
    yield goal("one line down, 95th percentile, ms", max(map(high, down)) * 1e3, 33)
    ratio = statistics.median(largest.times["one line down"]) / statistics.median(
        least.times["one line down"]
    )
    yield goal(f"one line down, {largest.lines:,} over {least.lines:,}", ratio, 1.5)
    for name in ("sort", "search, first letter", "search, next letter"):
        times = largest.times[name]
        yield goal(f"{name} of {largest.lines:,}, median, ms", statistics.median(times) * 1e3, 150)
        yield goal(f"{name} of {largest.lines:,}, 95th percentile, ms", high(times) * 1e3, 150)
    yield goal("memory at most, MB", max(s.memory["at most"] for s in sessions) / 2**20, 100)


def goal(name: str, figure: float, most: float) -> str:
    """A figure against its goal, in a line."""
    return f"  {'met   ' if figure <= most else 'missed'} {name}: {figure:.2f}, goal {most:g}"
