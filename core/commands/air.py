"""`air`: properties of dry or moist air."""

from __future__ import annotations

from argparse import Namespace

from core.bench.air import air_properties
from core.commands import json_form, text_form


def run(args: Namespace) -> int:
    """Print the properties of air."""
    air = air_properties(args.temperature_C, args.pressure_Pa, args.relative_humidity)
    print(json_form.line(json_form.air_form(air)) if args.json else text_form.air_text(air))
    return 0
