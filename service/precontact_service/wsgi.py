"""The application that gunicorn serves: `precontact_service.wsgi:application`."""
from . import create_app

application = create_app()
application.test_client().get("/readyz")        # before the workers are forked: proves the rule set, and compiles what they will share
