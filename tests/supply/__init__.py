"""What is shipped: bounds of the dependencies, the wheel, the bill of materials."""
