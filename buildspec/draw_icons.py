"""Draw the app's mark: a display that falls step by step, each step longer than the one before, a tap at each.

python buildspec/draw_icons.py writes buildspec/artwork/*.png; NumPy and the standard library only."""

from __future__ import annotations

import struct
import zlib
from itertools import pairwise
from pathlib import Path

import numpy as np

ARTWORK = Path(__file__).resolve().parent / "artwork"
GROUND = np.array([0x10, 0x19, 0x1E], dtype=float)
HOT = np.array([0xFF, 0x9C, 0x6E], dtype=float)
COOL = np.array([0x6C, 0xCB, 0xD8], dtype=float)
TAP = np.array([0xF3, 0xED, 0xE0], dtype=float)
OVERSAMPLING = 4
STEPS = 5
LINE = 0.035  # half the width of the line, in parts of the mark's side
DOT = 0.062  # radius of a tap


def corners() -> np.ndarray:
    """The staircase from the top left to the bottom right, in parts of the mark's side, y downwards."""
    level = np.linspace(0.16, 0.84, STEPS)
    # T falls as e^(-t): equal steps of T begin at times that lie ever further apart
    fall = (level - level[0]) / (level[-1] - level[0])
    time = -np.log(1.0 - 0.86 * fall)
    time = 0.12 + 0.62 * time / time[-1]
    ends = np.append(time[1:], 0.90)
    return np.array([point for t, end, y in zip(time, ends, level, strict=True) for point in ((t, y), (end, y))])


def _distance(x: np.ndarray, y: np.ndarray, a: np.ndarray, b: np.ndarray) -> np.ndarray:
    """Distance of each point from the segment a-b."""
    along = np.clip(((x - a[0]) * (b[0] - a[0]) + (y - a[1]) * (b[1] - a[1])) / np.sum((b - a) ** 2), 0.0, 1.0)
    return np.hypot(x - a[0] - along * (b[0] - a[0]), y - a[1] - along * (b[1] - a[1]))


def mark(side: int, scale: float, ground: bool) -> np.ndarray:
    """The mark on a square of `side` pixels, `scale` of its width wide. Returns (side, side, 4) bytes, RGBA."""
    fine = side * OVERSAMPLING
    axis = ((np.arange(fine) + 0.5) / fine - 0.5) / scale + 0.5
    x, y = np.meshgrid(axis, axis)
    path = corners()
    line = np.min([_distance(x, y, a, b) for a, b in pairwise(path)], axis=0) <= LINE
    dots = np.min([np.hypot(x - px, y - py) for px, py in path[::2]], axis=0) <= DOT
    heat = np.clip((y - path[0, 1]) / (path[-1, 1] - path[0, 1]), 0.0, 1.0)[..., None]
    colour = np.where(dots[..., None], TAP, HOT * (1.0 - heat) + COOL * heat)
    cover = np.where((line | dots)[..., None], 1.0, 0.0)
    picture = np.concatenate([colour * cover, cover], axis=-1)
    small = picture.reshape(side, OVERSAMPLING, side, OVERSAMPLING, 4).mean(axis=(1, 3))
    alpha = small[..., 3:]
    if ground:
        colour, alpha = small[..., :3] + GROUND * (1.0 - alpha), np.ones_like(alpha)
    else:
        colour = small[..., :3] / np.maximum(alpha, 1e-9)
    return np.rint(np.concatenate([colour, 255.0 * alpha], axis=-1)).astype(np.uint8)


def png(pixels: np.ndarray) -> bytes:
    """A PNG file of RGBA bytes (PNG, third edition, W3C 2025: colour type 6, 8 bits, no filter)."""

    def chunk(kind: bytes, body: bytes) -> bytes:
        return struct.pack(">I", len(body)) + kind + body + struct.pack(">I", zlib.crc32(kind + body))

    height, width, _channels = pixels.shape
    rows = b"".join(b"\0" + row.tobytes() for row in pixels)
    head = struct.pack(">IIBBBBB", width, height, 8, 6, 0, 0, 0)
    return b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", head) + chunk(b"IDAT", zlib.compress(rows, 9)) + chunk(b"IEND", b"")


def pictures() -> dict[str, np.ndarray]:
    """Every picture that the build spec names."""
    plain = np.full((432, 432, 4), 255, dtype=np.uint8)
    plain[..., :3] = GROUND.astype(np.uint8)
    return {
        "icon.png": mark(512, 0.92, ground=True),
        "icon_front.png": mark(432, 0.56, ground=False),  # the launcher crops to the inner two thirds
        "icon_back.png": plain,
        "presplash.png": mark(512, 0.70, ground=True),
    }


if __name__ == "__main__":
    ARTWORK.mkdir(exist_ok=True)
    for name, pixels in pictures().items():
        (ARTWORK / name).write_bytes(png(pixels))
