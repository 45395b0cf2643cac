"""What the library raises when an attribute is missing, of the wrong kind, or leads nowhere."""

from __future__ import annotations

UNREADABLE = (AttributeError, TypeError, ValueError, RuntimeError, IndexError, KeyError)
