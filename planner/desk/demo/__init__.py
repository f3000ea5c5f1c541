"""The small demo week and its rig, opened the first time."""
