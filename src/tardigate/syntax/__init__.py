"""Syntax: text to trees."""
