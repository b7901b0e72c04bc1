"""Notes, intervals and temperaments: which pitch every stop is meant to sound."""
