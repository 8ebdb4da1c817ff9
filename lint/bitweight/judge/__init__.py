"""Where the firmware and the board meet."""
