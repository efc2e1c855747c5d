"""Published empirical correlations for diffusivities, packings and trays: pure functions of arrays."""
