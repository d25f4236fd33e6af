"""The commands of the terminal, one file each; `core.__main__` calls them."""
