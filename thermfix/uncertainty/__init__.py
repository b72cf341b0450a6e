"""First-order propagation and Monte Carlo: arrays in, arrays out."""
