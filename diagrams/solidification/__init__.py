"""How alloys freeze: at equilibrium, and without diffusion in the solid."""
