"""Rules of the workshop, without any web in them."""
