"""Pure values in, values out: no clock, no randomness, no files, no framework."""
