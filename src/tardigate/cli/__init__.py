"""Cli: argv to exit status."""
