"""Contrast of two colours after WCAG 2.2, so that a theme can be checked by computation.

References: W3C, Web Content Accessibility Guidelines 2.2, definitions of relative luminance and contrast ratio."""

from __future__ import annotations

Colour = tuple[float, float, float, float]


def colour(hexadecimal: str) -> Colour:
    """`#rrggbb` as red, green, blue, alpha in 0…1."""
    digits = hexadecimal.lstrip("#")
    red, green, blue = (int(digits[i : i + 2], 16) / 255 for i in (0, 2, 4))
    return red, green, blue, 1.0


def relative_luminance(c: Colour) -> float:
    """Relative luminance [-] of an sRGB colour."""

    def linear(channel: float) -> float:
        return channel / 12.92 if channel <= 0.04045 else ((channel + 0.055) / 1.055) ** 2.4

    return 0.2126 * linear(c[0]) + 0.7152 * linear(c[1]) + 0.0722 * linear(c[2])


def contrast_ratio(a: Colour, b: Colour) -> float:
    """(L₁ + 0.05) / (L₂ + 0.05) [-], from 1 to 21."""
    lighter, darker = sorted((relative_luminance(a), relative_luminance(b)), reverse=True)
    return (lighter + 0.05) / (darker + 0.05)


def mixed(a: Colour, b: Colour, share: float) -> Colour:
    """`share` of b in a, channel by channel."""
    return tuple(x + (y - x) * share for x, y in zip(a, b, strict=True))  # type: ignore[return-value]
