#!/usr/bin/env python3
"""The peer at the work of `dataset`: read a scene, a fresh lens for each picture, render, write the picture.

  dataset.py SCENES_FOLDER OUT_FOLDER COUNT [--workers 2] [--format png] [--seed 1]

The lens of case-12mp.json with coefficients drawn as in dataset.js. Prints the seconds of a picture, imports
left out.
"""
import argparse, glob, json, os, time
import cv2
import numpy as np
import scipy_render

DEVIATIONS = {"W040": 0.1, "W131": 0.2, "W222": 0.2, "W220": 0.1, "W311": 1}
here = os.path.dirname(os.path.abspath(__file__))
a = argparse.ArgumentParser()
a.add_argument("scenes"), a.add_argument("out"), a.add_argument("count", type=int)
a.add_argument("--workers", type=int, default=2), a.add_argument("--format", default="png")
a.add_argument("--seed", type=int, default=1)
o = a.parse_args()
case = json.load(open(os.path.join(here, "case-12mp.json")))
scenes = sorted(glob.glob(os.path.join(o.scenes, "*.png")))
random = np.random.default_rng(o.seed)
codes = np.arange(256) / 255
linear = np.where(codes <= 0.04045, codes / 12.92, ((codes + 0.055) / 1.055) ** 2.4).astype(np.float32)
start = time.perf_counter()
for i in range(o.count):
    waves = {k: v + DEVIATIONS[k] * random.standard_normal() for k, v in case["waves"].items()}
    scene = linear[cv2.imread(scenes[i % len(scenes)])[..., ::-1]]
    picture, _ = scipy_render.render({**case, "waves": waves}, np.ascontiguousarray(scene), o.workers)
    light = np.clip(picture, 0, 1)
    light = np.where(light <= 0.0031308, 12.92 * light, 1.055 * light ** (1 / 2.4) - 0.055)
    samples = (255 * light[..., ::-1] + 0.5).astype(np.uint8)
    cv2.imwrite(os.path.join(o.out, f"{o.seed}-{i}.{o.format}"), samples)
print((time.perf_counter() - start) / o.count)
