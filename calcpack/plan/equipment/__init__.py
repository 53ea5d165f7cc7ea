"""Equipment: functions that add the steps of one machine or exchanger to a plan.

Every method is laid out of these; a compressor is written once.
"""
