"""Parts: trees to parts, the one model of a delay description."""
