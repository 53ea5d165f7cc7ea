"""Plans: steps in order, who uses whom; equipment that adds its steps to a plan.

A plan holds no numbers. A method lays it from its options alone (:mod:`plan`),
:mod:`lay` proves its dimensions and numbers its steps, and :mod:`calcpack.solving`
evaluates it as often as it is asked.
"""
