"""Records: what the journal adds up to, derived in the same transaction.

A record is one JSON body by type and id, with the position of the entry that
changed it last. ``change`` is what a handler may do, ``handlers`` turn entries
into records, ``reactions`` let the server answer entries with entries of its
own, ``ledger`` is the one write path, ``rebuild`` derives everything again,
``queries`` is what screens and documents ask for.
"""

#: Raised whenever a handler puts other records than before: a store of another
#: shape is derived again when it is opened, and each device reads all again.
SHAPE = 3
