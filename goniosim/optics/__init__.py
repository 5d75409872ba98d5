"""Optics in plain numpy: media, refraction, power, pencils, paraxial sums.

Nothing here is compiled and nothing here knows of scenes. The compiled tracer has its own copies of
Snell and Fresnel; these are the readable twins that tests and `goniosim verify` hold it to.
"""
