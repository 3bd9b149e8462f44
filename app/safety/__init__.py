"""Hazards, gates and waste: cautions that name the hazard and the usual precaution.

Nothing here replaces the safety data sheet of the very lot, the laboratory's
chemical hygiene plan, local codes or licensed practice; each answer says so.
The words are written once: the server's pages, the printed sheets and the
offline client all show what :func:`app.safety.pack.client_pack` gives.

Pure: no clock, no file, no network.
"""

from app.safety.pack import client_pack

__all__ = ["client_pack"]
