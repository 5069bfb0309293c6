"""Member resistance: one file per standard behind one small interface."""
