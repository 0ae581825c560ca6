"""Writes exposures in every layout with astropy into the folder given, and prints the truth as JSON.

Everything that is expected comes from astropy: wavelengths from its WCS, times from its light travel
time, factors from its radial velocity correction.
"""

import json
import sys

import numpy as np
from astropy import units as u
from astropy.constants import c
from astropy.coordinates import EarthLocation, SkyCoord
from astropy.io import fits
from astropy.table import Table
from astropy.time import Time
from astropy.utils import iers
from astropy.wcs import WCS

iers.conf.auto_download = False
folder = sys.argv[1]
site = EarthLocation.from_geodetic(-70.7, -30.2, 2700)
star = SkyCoord(83.1 * u.deg, -12.4 * u.deg)
rng = np.random.default_rng(5)
N, ROWS, EXPOSURE = 60, 4, 240.0
starts = Time("2024-01-01T02:00:00", scale="utc") + np.arange(ROWS) * 300 * u.s
mids = starts + 0.5 * EXPOSURE * u.s
bjd = (mids.tdb + mids.light_travel_time(star, location=site)).jd1, (
    mids.tdb + mids.light_travel_time(star, location=site)
).jd2
factor = 1 + (star.radial_velocity_correction(obstime=mids, location=site) / c).decompose().value
flux = (100 + rng.normal(size=(ROWS, N))).astype("f4")
error = rng.uniform(1, 2, size=(ROWS, N)).astype("f4")
truth = {
    "bjd": [[float(a), float(b)] for a, b in zip(*bjd)],
    "factor": factor.tolist(),
    "flux": flux.astype(float).tolist(),
    "error": error.astype(float).tolist(),
    "exposure_s": EXPOSURE,
    "files": [],
}


def wcs_header(ctype, cunit, crval, cdelt, crpix=1.0):
    header = fits.Header()
    header["CTYPE1"], header["CUNIT1"] = ctype, cunit
    header["CRVAL1"], header["CDELT1"], header["CRPIX1"] = crval, cdelt, crpix
    return header


def wavelengths(header):
    wcs = WCS(header, naxis=1)
    return (wcs.wcs_pix2world(np.arange(N)[:, None], 0)[:, 0] * 1e10).tolist()


def site_cards(header, geodetic=False):
    header["RA"] = (star.ra.to_string(unit=u.hour, sep=":", precision=4), "hh:mm:ss")
    header["DEC"] = star.dec.to_string(unit=u.deg, sep=":", precision=4)
    if geodetic:
        header["SITELAT"], header["SITELONG"], header["SITEALT"] = -30.2, (70.7, "[deg] west"), 2700.0
    else:
        for axis, value in zip("XYZ", site.geocentric):
            header[f"OBSGEO-{axis}"] = value.to_value(u.m)
    header["SPECSYS"] = "TOPOCENT"


def note(name, layout, wave, medium, rows, **options):
    truth["files"].append(
        {"name": name, "layout": layout, "wavelength_angstrom": wave, "medium": medium, "rows": rows, **options}
    )


# image: linear AWAV in nm with an error HDU, MJD-OBS; and WAVE-LOG, gzipped, DATE-AVG, west longitude
header = wcs_header("AWAV", "nm", 486.0, 0.05, 10.5)
site_cards(header)
header["MJD-OBS"], header["EXPTIME"] = starts[0].mjd, EXPOSURE
fits.HDUList([fits.PrimaryHDU(flux[0], header), fits.ImageHDU(error[0], name="ERR")]).writeto(f"{folder}/linear.fits")
note("linear.fits", "image", wavelengths(header), "air", [0])

header = wcs_header("WAVE-LOG", "Angstrom", 4860.0, 0.5)
site_cards(header, geodetic=True)
header["DATE-AVG"], header["XPOSURE"], header["TIMESYS"] = mids[1].isot, EXPOSURE, "UTC"
fits.HDUList(
    [fits.PrimaryHDU(flux[1], header), fits.ImageHDU(error[1].astype(float) ** 2, name="VARIANCE")]
).writeto(f"{folder}/log.fits.gz")
note("log.fits.gz", "image", wavelengths(header), "vacuum", [1])

# stack: times of mid-exposure in a table, TDB at the barycentre
header = wcs_header("WAVE", "m", 4.86e-7, 5e-11)
site_cards(header)
times = Table({"BJD_TDB": np.sum(bjd, axis=0), "EXPTIME": np.full(ROWS, EXPOSURE) * u.s})
fits.HDUList(
    [
        fits.PrimaryHDU(),
        fits.ImageHDU(flux, header, name="FLUX"),
        fits.ImageHDU(1 / error.astype(float) ** 2, name="IVAR"),
        fits.BinTableHDU(times, name="TIMES"),
    ]
).writeto(f"{folder}/stack.fits")
note("stack.fits", "stack", wavelengths(header), "vacuum", list(range(ROWS)), rough_time=True)

# table: log10 wavelengths, inverse variance with zeros, one masked
wave = 10 ** (np.linspace(3.687, 3.69, N))
ivar = 1 / error[2].astype(float) ** 2
ivar[7] = 0
table = Table({"loglam": np.log10(wave), "flux": flux[2], "ivar": ivar})
hdu = fits.BinTableHDU(table)
site_cards(hdu.header)
hdu.header["DATE-BEG"], hdu.header["XPOSURE"], hdu.header["VACUUM"] = starts[2].isot, EXPOSURE, True
fits.HDUList([fits.PrimaryHDU(), hdu]).writeto(f"{folder}/table.fits")
note("table.fits", "table", wave.tolist(), "vacuum", [2], masked=[7])

# text: ECSV, with a log
Table({"wavelength": wave * u.AA, "flux": flux[3], "error": error[3]}).write(f"{folder}/text.ecsv")
with open(f"{folder}/log.csv", "w") as log:
    log.write("file,start,exposure_s,ra,dec,latitude,longitude,height\n")
    log.write(f"text.ecsv,{starts[3].isot},{EXPOSURE},83.1,-12.4,-30.2,-70.7,2700\n")
note("text.ecsv", "text", wave.tolist(), "vacuum", [3], log="log.csv", wavelength_medium="vacuum")

print(json.dumps(truth))
