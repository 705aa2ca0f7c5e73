#!/usr/bin/env python3
"""What an engineer would write today with NumPy, SciPy and OpenCV: the rate to beat.

Blurs and warps one picture through a lens given by its five third-order coefficients, with the
same model and the same order of work as this project: distortion as a remap, then a blur by
PSFs on a regular grid of field nodes, blended bilinearly between nodes (weights on the source
side, overlap-add in the frequency domain, one inverse transform a cell and channel).

  scipy_render.py CASE.json IN.png OUT.npy [--workers 2] [--repeat 3]

CASE.json: {"f_number", "pixel_pitch_um", "full_field_mm", "wavelength_nm" (reference),
            "waves": {"W040", "W131", "W222", "W220", "W311", "W020"},
            "bands_nm": [[r...], [g...], [b...]] or [[mono...]], "cell_px", "kernel_px"}
IN.png is read as linear light (8 or 16 bit, scaled to 0..1). OUT.npy: float32, H x W x C.
Prints one line of JSON with the seconds of each part; reading and writing files is not counted.
Needs Debian's python3-numpy, python3-scipy and python3-opencv.
"""
import argparse, json, math, time
import cv2
import numpy as np
import scipy.fft as sf


def psf(case, nm, hx, hy, n, s):
    """One pixel-integrated PSF, kernel_px square, unit sum, for the field point (hx, hy)."""
    lam = nm * 1e-3
    dx = case["pixel_pitch_um"] / s
    d = n * dx / (lam * case["f_number"])          # pupil diameter in samples
    ax = (np.arange(n) - n // 2) / (d / 2)
    x, y = np.meshgrid(ax, ax)
    r2 = x * x + y * y
    h = math.hypot(hx, hy)
    ux, uy = (hx / h, hy / h) if h > 0 else (0.0, 1.0)
    m = x * ux + y * uy                            # rho cos(theta)
    w = case["waves"]
    opd = (w.get("W040", 0) * r2 * r2 + w.get("W131", 0) * h * r2 * m
           + w.get("W222", 0) * h * h * m * m + w.get("W220", 0) * h * h * r2 + w.get("W020", 0) * r2)
    opd = opd * (case["wavelength_nm"] / nm)
    # soft edge one sample wide
    a = np.clip((1 - np.sqrt(r2)) * (d / 2) + 0.5, 0, 1)
    # an even s has no fine sample on a pixel centre: tilt the pupil so that pixel borders fall between samples
    tilt = (x + y) * (d / 2) / n * (0.5 if s % 2 == 0 else 0.0)
    p = (a * np.exp(2j * np.pi * (opd + tilt))).astype(np.complex64)
    # W > 0 is undercorrected and eps = -2 N lambda grad W, which fixes the sign of the transform
    f = sf.ifft2(sf.ifftshift(p), norm="forward")
    i = np.abs(sf.fftshift(f)) ** 2
    # sample n//2 lies on the geometrical image point; put pixel centres there
    i = np.roll(i, (s // 2, s // 2), (0, 1)) if s > 1 else i
    k = n // s
    i = i.reshape(k, s, k, s).sum((1, 3))
    c, half = k // 2, case["kernel_px"] // 2
    i = i[c - half:c + half, c - half:c + half]
    return (i / i.sum()).astype(np.float32)


def render(case, img, workers):
    t = {}
    t0 = time.perf_counter()
    hgt, wid, ch = img.shape
    p = case["pixel_pitch_um"] * 1e-3
    cx, cy = (wid - 1) / 2, (hgt - 1) / 2
    # --- distortion: output pixel at r takes the ideal picture at r', r = r' - 2 N lambda W311 h'^3
    k3 = -2 * case["f_number"] * case["wavelength_nm"] * 1e-6 * case["waves"].get("W311", 0)
    ff = case["full_field_mm"]
    yy, xx = np.mgrid[0:hgt, 0:wid].astype(np.float32)
    rx, ry = (xx - cx) * p, (yy - cy) * p
    r = np.sqrt(rx * rx + ry * ry)
    q = r.copy()
    for _ in range(4):
        q = q - (q + k3 * (q / ff) ** 3 - r) / (1 + 3 * k3 * q * q / ff ** 3)
    g = np.where(r > 0, q / np.maximum(r, 1e-9), 1).astype(np.float32)
    src = cv2.remap(img, (cx + (xx - cx) * g).astype(np.float32), (cy + (yy - cy) * g).astype(np.float32),
                    cv2.INTER_CUBIC, borderMode=cv2.BORDER_REPLICATE)
    t["warp"] = time.perf_counter() - t0
    # --- PSFs, a quadrant computed and mirrored
    t1 = time.perf_counter()
    cell, ker = case["cell_px"], case["kernel_px"]
    ncx, ncy = -(-wid // cell), -(-hgt // cell)
    nfft = sf.next_fast_len(cell + ker, real=True)
    x0, y0 = cx - ncx * cell / 2, cy - ncy * cell / 2   # grid centred on the axis
    lam_min = min(min(b) for b in case["bands_nm"]) * 1e-3
    s = max(1, math.ceil(case["pixel_pitch_um"] / (lam_min * case["f_number"] / 2)))
    n = 1
    while n < s * ker:
        n *= 2
    spec = {}
    for j in range((ncy + 2) // 2):
        for i in range((ncx + 2) // 2):
            hx = (i * cell - ncx * cell / 2) * p / ff
            hy = (j * cell - ncy * cell / 2) * p / ff
            for c, band in enumerate(case["bands_nm"]):
                k = sum(psf(case, nm, hx, hy, n, s) for nm in band) / len(band)
                spec[i, j, c] = k
    t["psf"] = time.perf_counter() - t1
    t2 = time.perf_counter()

    def kernel(i, j, c):
        fi, fj = i > ncx - i, j > ncy - j
        k = spec[ncx - i if fi else i, ncy - j if fj else j, c]
        if fi:
            k = np.roll(k[:, ::-1], 1, 1)
        if fj:
            k = np.roll(k[::-1], 1, 0)
        return k

    ramp = ((np.arange(cell) + 0.5) / cell).astype(np.float32)
    wts = [np.outer(b, a) for b in (1 - ramp, ramp) for a in (1 - ramp, ramp)]
    ox, oy = int(math.floor(x0 + 0.5)), int(math.floor(y0 + 0.5))
    half = ker // 2
    pad = np.pad(src, ((-oy, oy + ncy * cell - hgt), (-ox, ox + ncx * cell - wid), (0, 0)), mode="edge")
    out = np.zeros((ncy * cell + 2 * half, ncx * cell + 2 * half, ch), np.float32)
    hat = {}
    for c in range(ch):
        for j in range(ncy):
            for i in range(ncx):
                x = pad[j * cell:(j + 1) * cell, i * cell:(i + 1) * cell, c]
                acc = 0
                buf = np.zeros((4, nfft, nfft), np.float32)
                for m, w in enumerate(wts):
                    buf[m, :cell, :cell] = x * w
                b = sf.rfft2(buf, workers=workers)
                for m, (dj, di) in enumerate(((0, 0), (0, 1), (1, 0), (1, 1))):
                    key = (i + di, j + dj, c)
                    if key not in hat:
                        z = np.zeros((nfft, nfft), np.float32)
                        z[:ker, :ker] = kernel(*key)
                        hat[key] = sf.rfft2(z, workers=workers)
                    acc = acc + b[m] * hat[key]
                y = sf.irfft2(acc, (nfft, nfft), workers=workers)
                e = cell + ker
                out[j * cell:j * cell + e, i * cell:i * cell + e, c] += y[:e, :e][:out.shape[0] - j * cell, :out.shape[1] - i * cell]
    res = out[half - oy:half - oy + hgt, half - ox:half - ox + wid]
    t["blur"] = time.perf_counter() - t2
    t["total"] = time.perf_counter() - t0
    return res, t


if __name__ == "__main__":
    a = argparse.ArgumentParser()
    a.add_argument("case"), a.add_argument("src"), a.add_argument("dst")
    a.add_argument("--workers", type=int, default=2), a.add_argument("--repeat", type=int, default=1)
    o = a.parse_args()
    case = json.load(open(o.case))
    raw = cv2.imread(o.src, cv2.IMREAD_UNCHANGED)
    img = raw.astype(np.float32) / (65535 if raw.dtype == np.uint16 else 255)
    img = img[..., None] if img.ndim == 2 else img[..., 2::-1].copy()
    if len(case["bands_nm"]) == 1:
        img = img[..., :1]
    best = None
    for _ in range(o.repeat):
        res, t = render(case, np.ascontiguousarray(img), o.workers)
        if best is None or t["total"] < best["total"]:
            best = t
    np.save(o.dst, res)
    print(json.dumps({k: round(v, 3) for k, v in best.items()}))
