"""What a pass is worth and what it costs, joined into a `Problem`."""
