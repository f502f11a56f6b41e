"""The application that gunicorn serves: `precontact_service.wsgi:application`."""
from . import create_app

application = create_app()
