"""Graph: the flat design to vertices (net, edge) and hops."""
