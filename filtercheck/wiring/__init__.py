"""A filter's sections or connections -> the responses at its outputs."""
