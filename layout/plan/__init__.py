"""An instrument made into a plan: pitch, strings and geometry in order, and what is doubtful."""
