"""A stand-in for a store that speaks the S3 protocol: serves from memory on a free port of this machine and says where."""

import os

# Before the library is read: it must never look for credentials or other machines.
os.environ.update(AWS_ACCESS_KEY_ID="made-up", AWS_SECRET_ACCESS_KEY="made-up", AWS_EC2_METADATA_DISABLED="true")

from moto.server import DomainDispatcherApplication, create_backend_app
from werkzeug.serving import make_server

server = make_server("127.0.0.1", 0, DomainDispatcherApplication(create_backend_app), threaded=True)
print(f"http://127.0.0.1:{server.server_port}", flush=True)
server.serve_forever()
