"""The photo of a form with its time and place, as the device said them openly, or without."""

from __future__ import annotations

from typing import TYPE_CHECKING

from django import forms

from structures.actions.photos import Position, keep_photo

if TYPE_CHECKING:
    from uuid import UUID

    from structures.models import Photo, Site, User


class PhotoForm(forms.Form):
    """One photo; a script fills in when and where it was taken, where that is allowed."""

    photo = forms.FileField(required=False)
    taken_at = forms.DateTimeField(required=False, input_formats=["%Y-%m-%dT%H:%M:%S.%fZ"])
    lat = forms.FloatField(required=False, min_value=-90, max_value=90)
    lon = forms.FloatField(required=False, min_value=-180, max_value=180)
    accuracy_m = forms.FloatField(required=False, min_value=0)

    def keep(self, *, site: Site, photo_id: UUID, what: str, by: User) -> Photo | None:
        """Keep the photo that was sent, if one was; what the device did not say stays unknown.

        Raises
        ------
        Refused
            If it is no picture, or may not be kept here.
        """
        said = self.cleaned_data if self.is_valid() else {}
        if not said.get("photo"):
            return None
        place = None
        if said["lat"] is not None and said["lon"] is not None:
            place = Position(said["lat"], said["lon"], said["accuracy_m"])
        return keep_photo(
            site_id=site.pk,
            photo_id=photo_id,
            data=said["photo"].read(),
            by=by,
            what=what,
            taken_at=said["taken_at"],
            position=place,
        )
