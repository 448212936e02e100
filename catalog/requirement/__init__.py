"""What a machine asks of a motor: options or a TOML file → what motors are judged by.

``fields`` is the table of all that may be said; ``read`` and ``file`` make a requirement of it.
"""
