"""The physics of a cooling body, and its inverse: from what a display showed to a coefficient."""
