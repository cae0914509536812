"""What the door sends the rooms to do: each takes a desk, returns an answer, prints nothing."""
