"""Expected readings, test sheets, verdicts and a living manual for refrigerating plants and heat pumps.

The rooms, from the ground floor up, are described in DEVELOPERS.md. Importing this package imports nothing heavy.
"""

__version__ = "0.1.0"
