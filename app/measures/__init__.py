"""Effect measures: arrays of fourfold tables in, arrays of estimates, limits and p values out.

Nothing here rounds, clips or words a result. Undefined is nan, infinite is inf; the rules for empty
cells are the edge table in DEVELOPERS.md, which `tests/measures/test_edges.py` walks.
"""
