"""Text from a brief made safe for print: every character visible, none able to steer the page."""

from __future__ import annotations

import re

LONGEST_CELL = 32_000
"""Characters kept of one text: a workbook cell holds 32 767 (ISO/IEC 29500), less the ending."""

_BIDI_CONTROLS = frozenset(
    "\u061c\u200e\u200f\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069"
)
_CONTROL = re.compile(
    "[\x00-\x1f\x7f-\x9f\u061c\u200e\u200f\u2028\u2029\u202a-\u202e\u2066-\u2069\ufeff"
    "\ud800-\udfff\ufffe\uffff]"
)


def visible(text: str) -> str:
    """Return ``text`` on one line with control characters replaced by visible signs.

    Controls below U+0020 become their Unicode control pictures (a line feed prints as ␊);
    direction overrides, which could reorder a schedule on the page, become ``<U+202E>`` and the
    like; what XML cannot hold becomes U+FFFD. Letters of any script stay as they are.
    """
    shown = _CONTROL.sub(_sign, text)
    return shown if len(shown) <= LONGEST_CELL else shown[:LONGEST_CELL] + " … (shortened)"


def paragraphs(text: str) -> tuple[str, ...]:
    """Return the non-empty lines of a longer text, each made visible."""
    return tuple(visible(line.strip()) for line in text.splitlines() if line.strip())


def shortened(text: str, longest: int) -> str:
    """Return ``text`` cut to ``longest`` characters, the cut marked by an ellipsis."""
    return text if len(text) <= longest else text[: max(longest - 1, 0)] + "…"


def _sign(match: re.Match[str]) -> str:
    character = match.group()
    code = ord(character)
    if code < 0x20:
        return chr(0x2400 + code)
    if code == 0x7F:
        return "\u2421"
    if character in _BIDI_CONTROLS:
        return f"<U+{code:04X}>"
    return "\ufffd" if code in (0xFFFE, 0xFFFF) or 0xD800 <= code < 0xE000 else f"<U+{code:04X}>"
