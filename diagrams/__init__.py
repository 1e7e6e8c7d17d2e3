"""Phase diagrams as polygons, and the melting questions asked of them. No web in here."""
