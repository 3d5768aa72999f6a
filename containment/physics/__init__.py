"""The physics on plain float arrays in SI: no units, no input or output."""
