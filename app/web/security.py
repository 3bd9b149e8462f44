"""Every request is checked, every answer carries the headers, every error has one body."""

from __future__ import annotations

import logging
from typing import Any
from urllib.parse import urlsplit

from flask import Flask, Response, jsonify, request
from flask_smorest import Api
from werkzeug.exceptions import HTTPException

from app.errors import WeirbookError, flatten
from app.web.limits import TooMany

log = logging.getLogger("weirbook")

POLICY = "; ".join(
    (
        "default-src 'none'",
        "script-src 'self'",
        "style-src 'self'",
        "img-src 'self' data: blob:",
        "connect-src 'self'",
        "manifest-src 'self'",
        "worker-src 'self'",
        "font-src 'self'",
        "object-src 'none'",
        "base-uri 'none'",
        "form-action 'self'",
        "frame-ancestors 'none'",
    )
)
HEADERS = {
    "Content-Security-Policy": POLICY,
    "X-Content-Type-Options": "nosniff",
    "Referrer-Policy": "no-referrer",
    "Permissions-Policy": "camera=(self), geolocation=(self), microphone=(), payment=()",
    "Cross-Origin-Opener-Policy": "same-origin",
    "Cross-Origin-Resource-Policy": "same-origin",
}
SAFE = {"GET", "HEAD", "OPTIONS"}

WORDS = {
    400: ("bad_request", "The request could not be read. Nothing was changed."),
    404: ("not_found", "There is nothing under this address."),
    405: ("method", "This address does not take that kind of request."),
    413: (
        "too_large",
        "That is more than the server takes at once. Nothing was changed; send it in smaller parts.",
    ),
    415: ("media_type", "The server takes JSON only. Nothing was changed."),
    422: ("invalid_input", "Some of what was given cannot be used. Nothing was changed."),
    500: (
        "failed",
        "The server failed at this. Nothing was half written; what is on this device is kept. Try again, "
        "then tell the administrator.",
    ),
}


class SignInNeeded(WeirbookError):
    """Nobody is signed in; what is recorded on the device is kept."""

    code = "sign_in_needed"
    status = 401


class NotPermitted(WeirbookError):
    """The person's roles do not allow it."""

    code = "not_permitted"
    status = 403


class NotFound(WeirbookError):
    """The thing asked for is not there."""

    code = "not_found"
    status = 404


class Conflict(WeirbookError):
    """The thing asked for cannot be done in the present state."""

    code = "conflict"
    status = 409


def body_of(status: int, fields: dict[str, list[str]] | None = None) -> dict[str, object]:
    """Return the one error body for an HTTP status."""
    code, words = WORDS.get(status, ("error", "The request could not be answered. Nothing was changed."))
    return {"error": words, "fields": fields or {}, "code": code}


class OneBodyApi(Api):
    """flask-smorest's API with Weirbook's error body in place of its own."""

    def handle_http_exception(self, error: HTTPException) -> Any:
        """Answer an HTTP error of any blueprint."""
        return answer_http(error)


def answer_http(error: HTTPException) -> tuple[Response, int]:
    """Turn an HTTP error into the one body."""
    messages = getattr(error, "data", {}).get("messages", {})
    nested = messages.get("json", messages) if isinstance(messages, dict) else messages
    status = error.code or 500
    return jsonify(body_of(status, flatten(nested) if nested else None)), status


def answer_known(error: WeirbookError) -> tuple[Response, int]:
    """Turn one of our errors into the one body."""
    response = jsonify(error.body())
    if isinstance(error, TooMany):
        response.headers["Retry-After"] = str(error.retry_after)
    return response, error.status


def answer_unknown(error: Exception) -> tuple[Response, int]:
    """Log what nobody foresaw and tell the person in words, never with a traceback."""
    log.exception("request failed", exc_info=error)
    return jsonify(body_of(500)), 500


def guard() -> None:
    """Refuse an unsafe request that another site could have caused.

    Raises
    ------
    NotPermitted
        If the header of our client is missing, or a foreign origin is named.
    """
    if request.method in SAFE:
        return
    site = request.headers.get("Sec-Fetch-Site", "same-origin")
    origin = request.headers.get("Origin")
    foreign = origin is not None and urlsplit(origin).netloc != request.host
    if request.headers.get("X-Weirbook") != "1" or site not in ("same-origin", "none") or foreign:
        raise NotPermitted("This request did not come from Weirbook's own pages. Nothing was changed.")


def dress(response: Response) -> Response:
    """Put the headers on an answer; API answers are never stored by a cache."""
    for name, value in HEADERS.items():
        response.headers.setdefault(name, value)
    if request.path.startswith("/api/"):
        response.headers["Cache-Control"] = "no-store"
    return response


def install(app: Flask) -> None:
    """Install the checks, headers and error answers."""
    app.before_request(guard)
    app.after_request(dress)
    app.register_error_handler(WeirbookError, answer_known)
    app.register_error_handler(HTTPException, answer_http)
    app.register_error_handler(Exception, answer_unknown)
