"""The integrator: spans marched in the variable that ends them, all nodes at once."""
