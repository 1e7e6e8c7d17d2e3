"""Equilibria of alloys of any number of elements, by minimising the Gibbs energy."""
