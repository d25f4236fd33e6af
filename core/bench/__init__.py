"""What stands on the bench: the body, its material, the air, the flow, the thermometer, and the set-up file."""
