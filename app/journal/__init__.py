"""The journal: the append-only list of everything that anyone stated.

An entry is one statement by one person on one device. The text that arrived is
kept byte for byte and chained by digest; nothing is updated or deleted. What
the server cannot accept is *held* here with its reasons, never dropped. Tables
of other packages are derived from the journal and can be rebuilt from it.

``measured`` reads typed numbers, ``units`` is the table of units, ``fields``
and ``kinds`` say what an entry of each kind must contain, ``entry`` is the
envelope, ``store`` the database, ``chain`` the walk that finds the first bad
entry.
"""
