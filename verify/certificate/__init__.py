"""The certificate: its file, how it is built and written, and the rechecker that stands alone."""
