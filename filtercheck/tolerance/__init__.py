"""The box of part values: what holds for every board in it, and the boards that break it."""
