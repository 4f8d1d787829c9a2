"""Work that may never come back, done where it can be killed: :class:`Worker`, :func:`run_limited`."""
