"""The clock, the stop signal and the progress lines of one pick."""

from __future__ import annotations

import math
import time
from dataclasses import replace

from sizing.selection.outcome import Limits, Progress


class Watch:
    """Keeps time, asks whether to stop, and reports incumbent and bound when they change."""

    def __init__(self, limits: Limits) -> None:
        self.limits = limits
        self._start = time.monotonic()
        self._last: tuple[str, float | None, float | None] | None = None

    @property
    def seconds(self) -> float:
        """Seconds since the start."""
        return time.monotonic() - self._start

    @property
    def left(self) -> float:
        """Seconds left, never negative."""
        return max(0.0, self.limits.seconds - self.seconds)

    def part(self, share: float) -> Watch:
        """Return a watch over the same clock that ends after ``share`` of the time."""
        limits = replace(self.limits, seconds=self.limits.seconds * share)
        return self.with_limits(limits)

    def with_limits(self, limits: Limits) -> Watch:
        """Return a watch over the same clock with other limits."""
        other = Watch(limits)
        other._start = self._start
        return other

    def stop(self) -> bool:
        """Return whether time is up or the user asked to stop."""
        return self.left <= 0.0 or self.asked()

    def asked(self) -> bool:
        """Return whether the user asked to stop."""
        return self.limits.stop is not None and self.limits.stop()

    def report(
        self, phase: str, incumbent: float | None, bound: float | None, analyses: int
    ) -> None:
        """Send a progress line when something has changed since the last."""
        known = None if bound is None or not math.isfinite(bound) else bound
        news = (phase, incumbent, known)
        if self.limits.report is None or news == self._last:
            return
        self._last = news
        self.limits.report(
            Progress(
                phase=phase,
                incumbent=incumbent,
                bound=known,
                analyses=analyses,
                seconds=self.seconds,
            )
        )
