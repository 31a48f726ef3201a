"""A reader of finished packages that shares no code with the program: claims are proved from the PDF alone."""
