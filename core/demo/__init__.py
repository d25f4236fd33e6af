"""An invented session to look at: the test bench of a small maker of fruit-drying cabinets."""
