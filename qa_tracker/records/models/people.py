"""People, their roles, and their credentials (kept apart: signing in writes no leaf)."""

from __future__ import annotations

from django.contrib.auth.base_user import AbstractBaseUser
from django.contrib.auth.hashers import check_password
from django.db import models
from django.utils.crypto import salted_hmac

from qa_tracker.records.models.base import Noun
from qa_tracker.records.models.sites import Site


class Person(Noun, AbstractBaseUser):
    """Someone who signs in. ``name_salt`` makes the ledger's commitment to the name."""

    password = None  # type: ignore[assignment]  # kept in Credential, which no leaf covers
    last_login = None  # type: ignore[assignment]  # the same

    username = models.CharField(max_length=60, unique=True)
    name = models.CharField(max_length=300)
    email = models.EmailField()
    is_active = models.BooleanField(default=True)
    name_salt = models.CharField(max_length=44)
    duties_site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="+")

    USERNAME_FIELD = "username"
    EMAIL_FIELD = "email"

    def __str__(self) -> str:
        return self.name

    def check_password(self, raw_password: str) -> bool:
        credential = Credential.objects.filter(person_id=self.pk).first()
        return credential is not None and check_password(raw_password, credential.password)

    def get_session_auth_hash(self) -> str:
        stored = Credential.objects.filter(person_id=self.pk).values_list("password", flat=True).first()
        return salted_hmac("leadline.session", stored or "", algorithm="sha256").hexdigest()

    def get_session_auth_fallback_hash(self) -> list[str]:
        return []


class Credential(models.Model):
    """A person's password hash; changed by signing in, so outside the ledger."""

    person = models.OneToOneField(Person, on_delete=models.DO_NOTHING, related_name="credential")
    password = models.CharField(max_length=200)
    last_login_at = models.DateTimeField(null=True)


class ApiToken(models.Model):
    """A bearer token of a person, stored as its SHA-256; issuing and revoking write leaves."""

    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="tokens")
    digest = models.CharField(max_length=64, unique=True)
    label = models.CharField(max_length=80)
    created_at = models.DateTimeField()
    revoked_at = models.DateTimeField(null=True)


class FeedToken(models.Model):
    """The secret address of a person's calendar feed, stored as its SHA-256; issuing and revoking write leaves."""

    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="feeds")
    digest = models.CharField(max_length=64, unique=True)
    created_at = models.DateTimeField()
    revoked_at = models.DateTimeField(null=True)


class RoleGrant(Noun):
    """A role held at one site, or (site empty) in the whole group, from a day until a day."""

    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="grants")
    role = models.CharField(max_length=20)
    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="+")
    from_on = models.DateField()
    until_on = models.DateField(null=True)
