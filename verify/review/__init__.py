"""A colleague's claims: reading tables, verdicts, consequences, slips."""
