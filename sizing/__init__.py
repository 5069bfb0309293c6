"""Lightest adequate catalogue sections for pin-jointed trusses, checked and proven."""
