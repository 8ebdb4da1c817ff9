"""The rules and microcontroller families that come with bitweight."""
