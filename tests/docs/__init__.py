"""Documentation that cannot drift: examples are run, reference pages are made from the code.

``pages`` takes Markdown apart, ``run`` executes its examples in a folder of its own, ``generated``
writes what follows from the code, ``renew`` puts both back into the page. Tests compare;
``python -m tests.docs --write`` renews.

In a page:

- a ```console block holds commands (``$ motorfolio …``) and what they print. A line ``…`` stands
  for any number of lines. The fence may say ``refused`` where a status of 2 is meant.
- a ```python block is executed; a ```text block right below it is what it prints. The blocks of a
  page share their names.
- ``<!-- with the sample catalog -->`` gives the page a catalog of all sample sheets and gears.
- between ``<!-- generated: NAME -->`` and ``<!-- end -->`` stands what ``generated`` makes.

All commands of a page run in one temporary folder that holds ``sample_entries/``, at a width of 80
columns and without colour. Times of day are shown as one fixed time.
"""
