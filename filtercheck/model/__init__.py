"""Plain data that the rooms hand to one another."""
