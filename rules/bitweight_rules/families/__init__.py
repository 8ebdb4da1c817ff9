"""Microcontroller families as data: one TOML file each."""
