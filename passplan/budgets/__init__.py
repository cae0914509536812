"""What a pass is worth and what it costs: link, data, energy, people; joined into a Problem."""
