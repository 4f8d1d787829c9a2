"""What a symbolic look shows about a density, step by step, and which law its statistic has."""
