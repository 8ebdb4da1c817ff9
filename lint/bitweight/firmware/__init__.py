"""What the C text says; nothing here knows about converters."""
