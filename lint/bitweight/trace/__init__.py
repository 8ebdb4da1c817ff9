"""How a raw code becomes a number in the firmware."""
