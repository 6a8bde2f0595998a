"""Makes the invented sample boards: circuits as data, writers for boards and netlists, a copper check.

Lengths are millimetres and angles degrees throughout this package, because it writes board files and
those hold nothing else; the y axis points down and a positive angle turns counter-clockwise on screen.
"""
