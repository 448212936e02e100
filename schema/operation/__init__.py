"""A motor at work: the load's cycle, gear and supply → current, voltage, temperature, verdict.

``judge`` holds motors against a demand, ``drive`` is one motor under voltage or current control.
"""
