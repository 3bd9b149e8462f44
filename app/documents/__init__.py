"""Paper and pictures: certificate, labels, custody form, run sheet, waste label, charts.

Dataclasses in, bytes or SVG text out; no storage, no clock, no network. The
same input gives the same bytes. What is printed comes in as the text that was
reported; this package chooses places and words, never digits.
"""
