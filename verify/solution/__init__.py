"""Where the cutoffs lie, the proof of their digits, and the critical function."""
