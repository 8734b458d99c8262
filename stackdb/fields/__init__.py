"""Fields in layered stacks: the spectral kernel, discs, conductive films. Pure numbers."""
