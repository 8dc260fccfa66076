"""Analysis: graph to facts; integers and times, no names and no text."""
