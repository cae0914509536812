"""The nouns: frozen, checked at birth; no files, no clock, no solver."""
