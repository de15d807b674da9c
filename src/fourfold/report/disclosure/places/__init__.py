"""One file for each part of the tree: which counts stand there and how they add up."""
