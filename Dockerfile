ARG BASE=python:3.13-slim

FROM ${BASE} AS build
RUN python3 -m venv /opt/halfturn
WORKDIR /build
COPY requirements.lock ./
RUN /opt/halfturn/bin/pip install --no-cache-dir --require-hashes --requirement requirements.lock
COPY pyproject.toml README.md LICENSE ./
COPY schemas schemas
COPY service service
RUN /opt/halfturn/bin/pip install --no-cache-dir --no-deps .

FROM ${BASE}
COPY --from=build /opt/halfturn /opt/halfturn
ENV PATH=/opt/halfturn/bin:$PATH PYTHONDONTWRITEBYTECODE=1
USER 10001:10001
EXPOSE 8000
HEALTHCHECK --interval=10s --timeout=5s --start-period=10s \
    CMD ["python", "-c", "from urllib.request import urlopen; urlopen('http://127.0.0.1:8000/readyz', timeout=4)"]
ENTRYPOINT ["halfturn"]
CMD ["serve", "--bind", "0.0.0.0:8000"]
