"""Numbers in, numbers out: the arithmetic of the tankhouse, with a source for every figure."""
