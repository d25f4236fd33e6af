"""The refusals of the core: one sentence each, saying what is wrong, where, and what to do."""

from __future__ import annotations


class BenchError(ValueError):
    """Base of every refusal; `str(error)` is the whole sentence for the person."""


class OutOfRange(BenchError):
    """A quantity lies outside the range for which a formula or table is valid."""


class BadSetup(BenchError):
    """A set-up cannot be used as it stands; the sentence names the file, the line where known, and the key."""


class BadReadings(BenchError):
    """A table of readings cannot be used as it stands; the sentence names file, line and column."""


class NoAnswer(BenchError):
    """The readings are sound but cannot give an answer, for example too few of them."""


class WrongUsage(BenchError):
    """A command was called with words it does not take."""


class JournalFault(BenchError):
    """The journal cannot keep or give back what it should."""


class HandoverFault(BenchError):
    """An export, a folder copy or a transfer could not be finished; what was there before still stands."""


class MissingLibrary(BenchError):
    """A function needs a library that this device does not carry; everything else works without it."""
