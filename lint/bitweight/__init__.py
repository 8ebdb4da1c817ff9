"""Checks that converter scaling in C firmware agrees with the board it runs on."""
