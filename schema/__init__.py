"""What a motor figure is: units, numbers, vocabulary, conventions, relations, physics. Pure."""
