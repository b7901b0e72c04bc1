"""Plane geometry of the board, in the trade's words.

Frame: millimetres, seen from above the playing face; x along the centre line from the nut toward
the bridge, y toward the treble side, z up. The origin is where the nut line crosses the centre
line.
"""
