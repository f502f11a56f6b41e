"""How gunicorn serves Precontact: as many sync workers as cores (measured: lowest p99, even balance), forked from a loaded master."""
import gc
import os

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")     # a request uses one core; before numpy is imported

bind = f"{os.environ.get('HOST', '127.0.0.1')}:{os.environ.get('PORT', '8080')}"
workers = int(os.environ.get("WEB_CONCURRENCY") or len(os.sched_getaffinity(0)))
worker_class = "precontact_service.worker.Worker"
preload_app = True
worker_tmp_dir = "/dev/shm" if os.path.isdir("/dev/shm") else None    # the heartbeat file must never wait for a disk
control_socket_disable = True
timeout = 30
graceful_timeout = 10
loglevel = "warning"        # the service logs its own requests
logconfig_dict = {          # and every line is one JSON object
    "version": 1,
    "disable_existing_loggers": False,
    "formatters": {"lines": {"class": "precontact_service.log.Lines"}},
    "handlers": {"errors": {"class": "logging.StreamHandler", "formatter": "lines", "stream": "ext://sys.stderr"}},
    "root": {"level": "WARNING", "handlers": ["errors"]},
    "loggers": {"gunicorn.error": {"level": "WARNING", "handlers": ["errors"], "propagate": False},
                "gunicorn.access": {"level": "CRITICAL", "handlers": [], "propagate": False}},
}
limit_request_line = 8190
limit_request_fields = 64
limit_request_field_size = 8190


def when_ready(server):
    """Keep the loaded rule sets out of the garbage collector's sight: it stays quick, and the workers keep sharing the pages."""
    gc.collect()
    gc.freeze()
