"""The rules: one check per file, in a folder per subject.

A rule file holds, in this order: what it checks and why, its limits with their origin, the check, and RULE.
It imports only `gatecheck.rulekit`.
"""
