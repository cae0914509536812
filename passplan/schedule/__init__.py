"""The optimisation model: variables, rows, steps, solve, lay-out, why not."""
