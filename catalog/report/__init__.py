"""What people see: terminal tables, plots, pages."""
