"""Infinite cyclic covers of a presentation complex: weights, lifted cells, chain complexes, homology."""
