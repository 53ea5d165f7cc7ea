"""The checker's marks and the signatures of a sheet, kept beside its spec, to how the sheet's check stands.

:mod:`targets` says what of a record can be marked and by what identity;
:mod:`reading` and :mod:`writing` turn a review file into :mod:`marks` and back;
:mod:`standing` holds both against each other. :mod:`naming`, :mod:`taking` and
:mod:`signing` add to a review file, :mod:`telling` puts a standing into words.
"""
