"""Rows that are written once: what was handed in or decided stays as it was."""

from __future__ import annotations

from typing import Any, NoReturn

from django.db import models


class UnchangingRows(models.QuerySet):
    """Rows that may be added and read; a new version is a new row."""

    def update(self, **_: Any) -> NoReturn:
        raise TypeError(f"{self.model._meta.verbose_name} is written once; add a new version")

    def delete(self) -> NoReturn:
        raise TypeError(f"{self.model._meta.verbose_name} is kept for good")


class Unchanging(models.Model):
    """One such row; on the database's side a trigger says the same (migrations)."""

    objects = UnchangingRows.as_manager()

    class Meta:
        abstract = True

    def save(self, *args: Any, **kwargs: Any) -> None:
        if not self._state.adding:
            raise TypeError(f"{self._meta.verbose_name} is written once; add a new version")
        super().save(*args, **kwargs)

    def delete(self, *_: Any, **__: Any) -> NoReturn:
        raise TypeError(f"{self._meta.verbose_name} is kept for good")
