"""The one table of diagnostic codes, one TOML file a reader."""
