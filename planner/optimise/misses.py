"""Why a take was left out."""

from __future__ import annotations
