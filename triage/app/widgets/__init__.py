"""Widgets of the app: panels of marked lines, lists, and fields."""
