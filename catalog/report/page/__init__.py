"""One self-contained HTML file of a catalog or of a search."""
