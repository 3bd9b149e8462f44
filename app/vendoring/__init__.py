"""The client's libraries, brought from npm without a bundler.

Five modules are copied from four pinned packages to ``static/vendor/``, where
the browser loads them as they are. Two things are changed on the way. Bare
imports (``from "preact"``) become relative ones, so that no import map is
needed and the page's policy can stay ``script-src 'self'``; and the pointer to
the source map goes, since no map is shipped. Every file must then have the
SHA-256 that ``manifest.json`` states, or nothing is written.

The copies are not committed: ``package-lock.json`` and the manifest fix them.
"""
