"""What people and programs see: the terminal log, the other screens, and the JSON records.

Everything here is a pure function from results to text or plain dictionaries; only
``mission.commands`` print and only ``files`` writes. A screen imports rich, a record does
not, and the wording that ``--help`` needs imports neither.
"""
