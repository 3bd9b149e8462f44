"""The care of a store on the command line: serve, rebuild, verify, back up, restore.

What a verb needs is imported when it runs, so that the sums start without it.
"""

from __future__ import annotations

import argparse
import json
import logging
import os
import sys
from collections.abc import Callable, Iterator
from contextlib import closing
from functools import wraps
from pathlib import Path
from typing import TYPE_CHECKING, TextIO

from app.errors import WeirbookError

if TYPE_CHECKING:
    from app.journal.store import Store

PORT = 8700

Verb = Callable[[argparse.Namespace], int]


def add_verbs(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    """Add the verbs of this module to the command line."""
    _add_serve(commands)
    for name, function, words in (
        ("rebuild", rebuild_records, "derive every record again from the journal"),
        ("verify", verify_chain, "walk the journal's chain and name the first bad entry"),
    ):
        one = commands.add_parser(name, help=words)
        _add_store(one)
        one.set_defaults(run=function)
    for name, function, words in (
        ("backup", make_backup, "copy a store into a new file, also while it serves, and verify the copy"),
        ("restore", restore_backup, "make a store from a copy; devices send again what came after it"),
    ):
        one = commands.add_parser(name, help=words)
        _add_store(one)
        one.add_argument("file", type=Path, help="the copy")
        one.set_defaults(run=function)
    one = commands.add_parser(
        "export-journal", help="write every entry with its place and digest, a JSON line each"
    )
    _add_store(one)
    one.add_argument("file", type=Path, help="the file to write; - for standard output")
    one.set_defaults(run=export_journal)
    one = commands.add_parser("verify-document", help="read a certificate's attached data, without a server")
    one.add_argument("file", type=Path, help="the PDF")
    one.add_argument("--base-url", default=f"http://localhost:{PORT}", help="the address printed on it")
    one.set_defaults(run=verify_document)


def _add_serve(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    one = commands.add_parser("serve", help="serve the programme in a store")
    _add_store(one)
    one.add_argument("--port", type=int, default=PORT)
    one.add_argument("--example", action="store_true", help="fill an empty store with the invented programme")
    one.add_argument(
        "--backup-folder",
        type=Path,
        default=os.environ.get("WEIRBOOK_BACKUP_FOLDER"),
        help="make verified copies here while serving (or WEIRBOOK_BACKUP_FOLDER)",
    )
    one.add_argument(
        "--backup-hours",
        type=float,
        default=float(os.environ.get("WEIRBOOK_BACKUP_HOURS", "24")),
        help="hours between two copies (or WEIRBOOK_BACKUP_HOURS)",
    )
    one.set_defaults(run=serve)


def _add_store(one: argparse.ArgumentParser) -> None:
    one.add_argument("--store", type=Path, default=Path("data"), help="the store's folder")


def _told(verb: Verb) -> Verb:
    """Tell an error in its own words and return 1, with no traceback."""

    @wraps(verb)
    def telling(arguments: argparse.Namespace) -> int:
        try:
            return verb(arguments)
        except WeirbookError as error:
            print(error.message, file=sys.stderr)
            return 1

    return telling


@_told
def serve(arguments: argparse.Namespace) -> int:
    """Serve until the process is ended."""
    from waitress.server import create_server

    from app.journal import chain
    from app.scenarios import load
    from app.web.backups import Backups
    from app.web.factory import create_app

    logging.basicConfig(level=logging.WARNING, format="%(message)s")
    address = f"http://localhost:{arguments.port}"
    fast = os.environ.get("WEIRBOOK_FAST_PASSWORDS") == "1"
    folder = arguments.backup_folder and Path(arguments.backup_folder)
    backups = Backups(arguments.store, folder, max(arguments.backup_hours, 0.01))
    app = create_app(arguments.store, address, fast_passwords=fast, backups=backups)
    store = app.extensions["weirbook"].store
    try:
        if arguments.example and chain.head(store.read()).position == 0:
            load(store)
        server = create_server(app, host="127.0.0.1", port=arguments.port, threads=8, ident=None)
        print(f"Weirbook serves {arguments.store} on {address}", flush=True)
        backups.start()
        server.run()
    except OSError as error:
        raise WeirbookError(f"Port {arguments.port} cannot be used: {error}.") from error
    except KeyboardInterrupt:
        pass
    finally:
        backups.stop()
        store.close()
    return 0


def _open(folder: Path) -> Store:
    from app.journal.store import Store

    if not (folder / "weirbook.db").exists():
        raise WeirbookError(f"There is no store in {folder}.")
    return Store(folder)


@_told
def rebuild_records(arguments: argparse.Namespace) -> int:
    """Derive every record again and say whether they came out the same."""
    from app.records.rebuild import rebuild

    with closing(_open(arguments.store)) as store:
        done = rebuild(store)
    same = "the same as before" if done.before == done.after else "different from before"
    print(f"{done.entries} entries replayed; the records are {same} ({done.after[:16]}).")
    return 0


@_told
def verify_chain(arguments: argparse.Namespace) -> int:
    """Walk the chain; 1 where an entry is bad."""
    from app.journal import chain

    with closing(_open(arguments.store)) as store:
        bad, head = chain.first_bad(store.read()), chain.head(store.read())
    if bad is not None:
        print(f"Entry {bad} is not as it was written; entries before it are whole.")
        return 1
    print(f"{head.position} entries, each as it was written; head {head.digest}.")
    return 0


@_told
def make_backup(arguments: argparse.Namespace) -> int:
    """Copy the store and say what the copy holds."""
    from app.journal.backup import backup

    head = backup(arguments.store, arguments.file)
    print(f"{arguments.file} holds {head.position} entries and was verified; head {head.digest}.")
    return 0


@_told
def restore_backup(arguments: argparse.Namespace) -> int:
    """Make a store from a copy and say what it holds."""
    from app.journal.backup import restore

    head = restore(arguments.file, arguments.store)
    print(f"{arguments.store} holds {head.position} entries; devices send again what came after them.")
    return 0


@_told
def export_journal(arguments: argparse.Namespace) -> int:
    """Write the journal as JSON lines: position, digest, how it came, the text as it was received."""
    from app.journal import chain

    to_screen = str(arguments.file) == "-"
    if not to_screen and arguments.file.exists():
        raise WeirbookError(f"{arguments.file} exists already; nothing was overwritten.")
    with closing(_open(arguments.store)) as store:
        if to_screen:
            _write_lines(sys.stdout, chain.exported(store.read()))
            return 0
        with arguments.file.open("w", encoding="utf-8", newline="\n") as file:
            count = _write_lines(file, chain.exported(store.read()))
    print(f"{arguments.file} holds {count} entries.")
    return 0


def _write_lines(file: TextIO, rows: Iterator[dict[str, object]]) -> int:
    count = 0
    for row in rows:
        file.write(json.dumps(row) + "\n")
        count += 1
    return count


@_told
def verify_document(arguments: argparse.Namespace) -> int:
    """Say what a certificate's attached data are and whether its pages were made from them; 1 if not."""
    from app.documents.verify import embedded_data, embedded_json, made_again
    from app.journal.entry import digest

    try:
        pdf = arguments.file.read_bytes()
    except OSError as error:
        raise WeirbookError(f"{arguments.file} cannot be read: {error.strerror}.") from error
    data, content = embedded_data(pdf), embedded_json(pdf)
    result, bottle = data["result"], data["sample"]["bottle"]
    print(f"Certificate {data['number']}: {result['reported']} {result['unit']}, bottle {bottle}.")
    print(f"Digest of its data: {digest(content)}")
    if made_again(pdf, arguments.base_url):
        print("Its pages were made from exactly these data by this version.")
        return 0
    print("Its pages are not what this version makes of these data: compare them by eye.")
    return 1
