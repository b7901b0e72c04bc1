"""Which sizes are sensible for each figure of a job, and which are absurd?

Generous: historic, tiny and giant instruments fit; a slipped decimal point or a wrong unit does
not. Our own judgement throughout, no source. Lengths in mm.
"""

from __future__ import annotations

from layout.job.cursor import Allowed

MOST_STRINGS = 64
MOST_FRETS = 200
LONGEST_TITLE = 80

# Pitch and length ------------------------------------------------------------------------------
A4_HZ = Allowed("the A4 needs", 200, 900, "Hz")
NOTE_HZ = Allowed("a note needs", 4, 8000, "Hz")
SCALE = Allowed("a scale needs", 100, 2000, "mm")
SQUARE_AT = Allowed("the square fret is", 0, MOST_FRETS)

# Strings -----------------------------------------------------------------------------------------
PLAIN_GAUGE = Allowed("a plain string needs", 0.05, 5, "mm")
WOUND_GAUGE = Allowed("a wound string needs", 0.1, 12, "mm")
GAUGE = Allowed("a string needs", 0.05, 12, "mm")
CORE = Allowed("a core needs", 0.05, 6, "mm")
UNIT_MASS = Allowed("a string needs", 0.01, 500, "g/m")
AXIAL_STIFFNESS = Allowed("a string needs", 10, 10_000_000, "N")
BENDING_STIFFNESS = Allowed("a string needs", 1e-9, 10, "N m2")
TENSION = Allowed("a string needs", 0.5, 3000, "N")
STRETCH_RISE = Allowed("a stretch test raises the pitch by", 0.1, 1200, "cents")
STRETCH_BY = Allowed("a stretch test draws the end", 0.001, 100, "mm")
STRING_LENGTH = Allowed("a string is", 50, 3000, "mm")
SHORT_START_BEHIND = Allowed("a short string starts", 0, 50, "mm")
EDGE_STEP = Allowed("the edge steps out", 0, 100, "mm")

# Spread ------------------------------------------------------------------------------------------
SPREAD = Allowed("a spread is", 0, 1000, "mm")
STRING_Y = Allowed("a string lies", -500, 500, "mm")
PAIR_GAP = Allowed("a course is", 0.1, 30, "mm")

# Frets -------------------------------------------------------------------------------------------
FRET_COUNT = Allowed("a board has", 1, MOST_FRETS)
FRET_STEP = Allowed("a step is", 1, 2000)
WEIGHT = Allowed("a weight is", 0, 1000)

# Setup -------------------------------------------------------------------------------------------
ACTION = Allowed("the action is", 0, 50, "mm")
HEIGHT_AT_NUT = Allowed("the height at the nut is", 0, 50, "mm")
HEIGHT_AT_SADDLE = Allowed("the height at the saddle is", 0, 200, "mm")
RELIEF = Allowed("relief is", -2, 5, "mm")
FINGER_BEHIND = Allowed("the finger presses", 0, 50, "mm")
FINGER_PRESS = Allowed("the finger presses the string down by", 0, 5, "mm")
FIXITY = Allowed("a support is hinged, carried, clamped, {tail: 12} or a number from", 0, 1)
TAIL = Allowed("a tail is", 0, 2000, "mm")
FREE = Allowed("the further length is", 0, 2000, "mm")
NUT_SHIFT = Allowed("a nut shift is", -30, 30, "mm")
SETBACK = Allowed("a setback is", -60, 60, "mm")
SADDLE_THICKNESS = Allowed("a saddle is", 0.1, 50, "mm")
TRAVEL = Allowed("a bridge piece travels", 0.1, 100, "mm")

# Nut and board -----------------------------------------------------------------------------------
NUT_THICKNESS = Allowed("a nut is", 0.5, 50, "mm")
CHANNEL_BEHIND = Allowed("a nut channel lies behind by", 0, 100, "mm")
MARGIN = Allowed("a margin is", 0, 100, "mm")
BOARD_WIDTH = Allowed("a board is", 5, 1000, "mm")
PAST_LAST_FRET = Allowed("a board runs past its last fret by", 0, 500, "mm")
BOARD_LENGTH = Allowed("a board is", 20, 2500, "mm")
BOARD_THICKNESS = Allowed("a board is", 0.5, 60, "mm")
RADIUS = Allowed("a radius is", 10, 20_000, "mm")
BINDING = Allowed("binding is", 0, 20, "mm")

# Wire and slots ----------------------------------------------------------------------------------
TANG = Allowed("a tang is", 0.1, 3, "mm")
TANG_DEPTH = Allowed("a tang reaches down", 0.3, 10, "mm")
CROWN_HEIGHT = Allowed("a crown is", 0.1, 5, "mm")
CROWN_WIDTH = Allowed("a crown is", 0.3, 8, "mm")
STICK = Allowed("a stick of wire is", 20, 20_000, "mm")
WIRE_OVER = Allowed("wire is cut longer by", 0, 50, "mm")
SLOT_WIDTH = Allowed("a slot is", 0.1, 5, "mm")
SLOT_CLEARANCE = Allowed("a slot is deeper than the tang by", 0, 5, "mm")
PAST_EDGE = Allowed("a slot runs past the edge by", 0, 100, "mm")
SHORT_OF_EDGE = Allowed("a slot ends short of the edge by", 0, 50, "mm")

# Shop --------------------------------------------------------------------------------------------
CUTTER = Allowed("a cutter is", 0.1, 12, "mm")
RUNOUT = Allowed("runout is", 0, 1, "mm")
KERF = Allowed("a kerf is", 0.01, 5, "mm")
FACE_SIZE = Allowed("a face mark is", 0.5, 50, "mm")
SIDE_SIZE = Allowed("a side mark is", 0.3, 20, "mm")
PIN_SIZE = Allowed("a pin is", 0.5, 20, "mm")
LOOP_GUT = Allowed("the gut of a loop is", 0.1, 5, "mm")
LOOP_TURNS = Allowed("a loop has", 1, 6, "turns")
TAPE_WIDTH = Allowed("tape is", 0.5, 30, "mm")
BOWED_STOP = Allowed("a stop is", 30, 1500, "mm")
NOTCH = Allowed("a notch is", 0.5, 20, "mm")
PAPER_MARGIN = Allowed("a paper margin is", 0, 50, "mm")
PAPER_OVERLAP = Allowed("sheets overlap by", 0, 100, "mm")
CHECK_BAR = Allowed("a printed 100 mm bar measures", 50, 200, "mm")
