"""Looks at a digital calibration certificate that the program wrote, with tools from outside.

    python3 tests/reference/dcc.py FILE [FOLDER]

FILE    a certificate; `cargo test --test dcc` leaves one under the target folder, tmp/dcc.xml
FOLDER  where dcc.xsd 3.3.0 lies, with what it imports beside it (SI_Format.xsd, xmldsig-core-schema.xsd)

Always: the rules of good practice, a Schematron that the package dcclib carries (pip install dcclib; by the national
metrology institute that publishes the format). With FOLDER: the schema itself, by lxml. The schemas are under a licence
of their own and are not in this repository. Nothing is fetched.
"""

import pathlib
import sys

from dcclib.validation.schematron import SchematronValidator
from lxml import etree

file = pathlib.Path(sys.argv[1])
wrong = 0
found = SchematronValidator.for_dcc().validate_str(file.read_text(encoding="utf-8"))
for report in found.failed_assertions + found.successful_reports:
    # Reports of the role "information" say what is there, not what is wrong.
    if report.role != "information":
        wrong += report.role != "warning"
        print(report.role, report.location, report.text)
if len(sys.argv) > 2:
    folder = pathlib.Path(sys.argv[2])

    class Beside(etree.Resolver):
        """Imports are taken from the folder, by their last name."""

        def resolve(self, url, public_id, context):
            return self.resolve_filename(str(folder / url.rsplit("/", 1)[-1]), context)

    parser = etree.XMLParser(no_network=True)
    parser.resolvers.add(Beside())
    schema = etree.XMLSchema(etree.parse(str(folder / "dcc.xsd"), parser))
    if not schema.validate(etree.parse(str(file))):
        wrong += len(schema.error_log)
        print(schema.error_log)
print("wrong:", wrong)
sys.exit(wrong > 0)
