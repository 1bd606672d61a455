"""Words, numbers and units as each language writes them.

In: an `Edition` (its languages, own words, unit style) and the word lists in ``templates/words``. Out: one `Language`
a tag, from `load.languages`; sentences made of a language and a row's assumptions, from `sentences`.
It must not know: how a chart, page or sheet looks, where a file goes, or any physics. It formats numbers and never
rounds a distance: a figure that is not rounded yet is refused.
"""
