"""The whole job for one input: AppraisalInput in, Appraisal out. Nothing is worded or rounded here."""
