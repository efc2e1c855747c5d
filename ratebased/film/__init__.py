"""Mass transfer through one film: exact, linearised, effective, explicit and numerical methods."""
