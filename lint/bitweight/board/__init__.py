"""What the hardware says."""
