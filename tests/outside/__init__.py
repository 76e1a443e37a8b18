"""Checks of the program against the outside world: a few numbers each, the published source beside them.

A value marked [M] is from memory of the cited work and was not seen in print while these tests were written.
"""
