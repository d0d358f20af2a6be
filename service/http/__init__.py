"""The HTTP service: routes that read a request, ask once, and write what came."""
