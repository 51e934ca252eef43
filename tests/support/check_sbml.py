"""Validates SBML texts with the format library of the standard (Debian's python3-sbml5): a JSON list of texts in, lists of findings out."""
import json
import sys

import libsbml

findings = []
for text in json.load(sys.stdin):
    document = libsbml.readSBMLFromString(text)
    document.checkConsistency()
    log = document.getErrorLog()
    findings.append([
        {
            "id": error.getErrorId(),
            "severity": error.getSeverityAsString(),
            "line": error.getLine(),
            "message": error.getMessage().strip(),
        }
        for error in (log.getError(index) for index in range(log.getNumErrors()))
    ])
json.dump(findings, sys.stdout)
