"""Report: facts and names to things to see."""
