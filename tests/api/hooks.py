"""Teaches the fuzzer what it does not know by itself: bodies of one JSON document a line."""

import json

import schemathesis


@schemathesis.serializer("application/x-ndjson")
def lines(_context, value):
    if isinstance(value, bytes):
        return value
    if isinstance(value, str):
        return value.encode("utf-8", "surrogatepass")
    return json.dumps(value).encode() + b"\n"
