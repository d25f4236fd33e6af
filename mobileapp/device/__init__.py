"""The one place that knows the platform: clock, stamps, vibration, sound, screen, storage."""
