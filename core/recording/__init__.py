"""The tally: events as they are tapped, the journal that keeps them, the readings they add up to."""
