"""Published figures → constants and findings: one weighted adjustment, the suspects, the causes.

``run.reconcile`` is the way in; ``relations`` lists the relations, ``causes`` the mistakes.
"""
