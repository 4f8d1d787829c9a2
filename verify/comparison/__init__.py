"""Second opinions in double precision, held against the proof."""
