"""One formula: text to tree, and the tree's readers.

In: the text that the engineer or a method wrote. Out: one frozen tree
(:mod:`tree`) with four readers: its dimension (:mod:`dimension`), its compiled
value (:mod:`evaluate`), its symbols and its numbers as typeset
(:mod:`typeset`). There is no second, hand-written equation anywhere.
"""
