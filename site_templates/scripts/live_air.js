/* Relative humidity from dry and wet bulb: ASHRAE Handbook Fundamentals 2017 (SI), chapter 1, equations 5, 6, 20, 33 and
   35. Numbers of the equations come with the page; everything is in SI units. Classic script, no dependency. */
var commissionLiveAir = function (air) {
  "use strict";
  function saturation(t) {
    var c = t < air.triple ? air.ice : air.water;
    return Math.exp(c[0] / t + c[1] + t * (c[2] + t * (c[3] + t * (c[4] + t * c[5]))) + c[6] * Math.log(t));
  }
  function ratio(vapour, pressure) { return air.massRatio * vapour / (pressure - vapour); }

  /* Of air at `dry` and `wet` (K) and `pressure` (Pa), from 0 to 1; null where no air can have these two. */
  function humidity(dry, wet, pressure) {
    var t = dry - 273.15, w = wet - 273.15, full = ratio(saturation(wet), pressure), water;
    if (wet > dry) { return null; }
    water = wet >= air.triple
      ? ((2501 - 2.326 * w) * full - 1.006 * (t - w)) / (2501 + 1.86 * t - 4.186 * w)
      : ((2830 - 0.24 * w) * full - 1.006 * (t - w)) / (2830 + 1.86 * t - 2.1 * w);
    return water >= 0 ? pressure * water / (air.massRatio + water) / saturation(dry) : null;
  }
  return { humidity: humidity };
};
