"""How a noun adds its routes: by one line that says shape and name, with the refusals it may answer declared."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from ninja import Router

from qa_tracker.api.errors import refusals

Decorator = Callable[[Callable[..., Any]], Callable[..., Any]]


class NounRouter(Router):
    """Routes of one noun."""

    def reads(self, path: str, shape: Any, operation_id: str, *refused: int) -> Decorator:
        """An operation that only reads; one thing out of sight answers 404."""
        missing = (404,) if "{" in path else ()
        return self.get(
            path, response=shape, operation_id=operation_id, openapi_extra=refusals(*missing, *refused)
        )

    def does(self, path: str, shape: Any, operation_id: str, status: int = 200) -> Decorator:
        """An operation that calls a command."""
        return self.post(
            path,
            response={status: shape},
            operation_id=operation_id,
            openapi_extra=refusals(400, 404, 409),
        )

    def makes(self, path: str, shape: Any, operation_id: str) -> Decorator:
        """An operation that leaves something new behind."""
        return self.does(path, shape, operation_id, 201)
