FROM python:3.11-slim

ENV PYTHONDONTWRITEBYTECODE=1 PYTHONUNBUFFERED=1 PIP_NO_CACHE_DIR=1
WORKDIR /opt/slackwater

COPY .locked/runtime.txt ./
RUN pip install --require-hashes -r runtime.txt

COPY pyproject.toml README.md ./
COPY model model
COPY webapp webapp
COPY demo_profiles demo_profiles
RUN pip install --no-deps . && rm -rf /opt/slackwater/*

RUN useradd --create-home slackwater
USER slackwater
WORKDIR /home/slackwater

EXPOSE 8050
HEALTHCHECK --interval=30s --timeout=5s --start-period=20s \
  CMD ["python", "-c", "import urllib.request as r; r.urlopen('http://127.0.0.1:8050/health', timeout=4)"]
CMD ["slackwater", "serve", "--host", "0.0.0.0", "--port", "8050"]
