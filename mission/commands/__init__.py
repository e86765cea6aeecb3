"""The commands of ``longlegs``, a file for those that belong together; they alone print.

Heavy rooms are loaded inside a command, so that ``--help`` answers at once.
"""
