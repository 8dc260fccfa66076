"""Source: files to text with places; diagnostics as data."""
