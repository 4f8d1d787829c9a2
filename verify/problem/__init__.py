"""What is asked: exact numbers, safe formulas, density, hypothesis, and the case file that holds them."""
