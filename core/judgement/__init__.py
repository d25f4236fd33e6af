"""How sure a result is, whether to keep the run, and the law over many runs."""
