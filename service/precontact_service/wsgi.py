"""The application that gunicorn serves: `precontact_service.wsgi:application`."""
from precontact_rules.retirement import RetirementFault
from precontact_rules.sealing import KeyFault

from . import create_app, log

try:
    application = create_app()
except (KeyFault, RetirementFault) as fault:
    log.event("not-started", because=str(fault))
    raise SystemExit(1) from None
application.test_client().get("/readyz")        # before the workers are forked: proves the rule set, and compiles what they will share
