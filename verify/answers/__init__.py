"""A table of proven cutoffs over a grid of designs, to be read from any language."""
