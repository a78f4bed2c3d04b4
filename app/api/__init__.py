"""JSON under /api/v1. Request models only document; intake alone refuses."""
