"""Mass, stiffness, stopped pitch and compensation of strings, on arrays; knows no board."""
