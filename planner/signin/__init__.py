"""Signing in: by the one-time link that `manage.py start` prints, or by name and password."""
