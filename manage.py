#!/usr/bin/env python3
"""Interim entry point."""

import os
import sys

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "planner.settings.local")
from django.core.management import execute_from_command_line

execute_from_command_line(sys.argv)
