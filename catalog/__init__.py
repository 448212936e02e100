"""What one does with many motors: read, store, search, show."""
