"""The rota board: people or stations down, time across, turns as blocks; painted, moved by hand, read aloud."""
