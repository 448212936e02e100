"""Pictures as SVG or PNG, by matplotlib (the extra "plot"); readable in grey."""
