"""The commands: each module parses what was typed, calls one function, prints the answer."""
