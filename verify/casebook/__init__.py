"""Running many cases: find them, run each, hold it against what it expects, and say so to people and machines."""
