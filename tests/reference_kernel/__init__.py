"""
The balances of tube and tank a second time: plain numpy, SciPy's LSODA, written before the compiled kernel.

It shares no line with the compiled kernel and takes the same records, so that the two check each other.
"""
