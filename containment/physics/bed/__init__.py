"""Granular beds: what holds them, what pours, what is thrown. Plain SI functions, one mechanism a module."""
