"""The whole as one ASGI application."""
