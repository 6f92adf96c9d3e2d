"""Tests over a real server."""
