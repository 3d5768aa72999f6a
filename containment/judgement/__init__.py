"""From physics to a verdict: holding window, limits, cautions."""
