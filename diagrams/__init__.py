"""Phase diagrams as polygons, and the melting questions asked of them. No web in here."""

import os

# The matrices here are small: threads of the algebra library cost more than they give. Whoever wants them
# says so in the environment; set before numpy is first loaded.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
