"""The pick: problem arrays, search, lower bounds and proof. Knows no standards and no files."""
