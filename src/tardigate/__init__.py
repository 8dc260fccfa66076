"""Tardigate: when every net of a gate-level design settles, and which chain of gates sets the limit."""
