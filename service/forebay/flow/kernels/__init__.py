"""Compiled loops over (point, pole) pairs: strict IEEE arithmetic, no reduction across points.

The loop over the points of a block is innermost, so that the compiler can use vector instructions
without reordering a sum: a result does not depend on how many points are asked for at once.
"""
