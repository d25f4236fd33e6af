"""To the laptop and back: CSV with metadata, folders, reports."""
