"""Parts that screens are put together from."""
