"""What came of a case, as text and as JSON."""
