"""From elements and nodes to network functions, exact in the part values."""
