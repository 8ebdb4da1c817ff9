"""Findings as text: each reporter takes facts and returns text."""
