"""The terminal screens; no logic of their own."""
