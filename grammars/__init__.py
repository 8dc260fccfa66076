"""The grammars of the languages that tardigate reads, shipped as package data."""
