"""Looking for better numbers with the solver: propose and rescale."""
