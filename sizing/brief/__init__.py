"""What the engineer asks for: the validated model and its readers."""
